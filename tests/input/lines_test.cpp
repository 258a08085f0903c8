#include <cmath>
#include <numbers>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "input/line_position.hpp"
#include "job_text.hpp"

namespace spinsieve {
namespace {

constexpr double pi = std::numbers::pi;

LinePosition position_with(const std::string& settings, const std::string& line) {
  const Job job =
      job_with(6, "measurement: {" + settings + "lines: [{" + line + ", intensity: 1, sigma: 1}]}");
  return job.measurements[0].lines[0].position;
}

TEST(LinesTest, PositionsInAnyUnitAgree) {
  // λ = 2 Å, 2θ = 60°: Q = 4π sin 30° / 2 = π Å⁻¹ and d = λ/(2 sin θ) = 2 Å, by hand.
  EXPECT_NEAR(position_with("wavelength: 2, ", "two_theta: 60").q, pi, 1e-14);
  EXPECT_NEAR(position_with("wavelength: 2, ", "d: 2").q, pi, 1e-14);
  EXPECT_EQ(position_with("wavelength: 2, ", "q: 3.125").q, 3.125);
  EXPECT_EQ(position_with("wavelength: 2, ", "two_theta: 60").text, "2θ 60°");
  EXPECT_EQ(position_with("", "d: 2.50").text, "d 2.50");
}

TEST(LinesTest, IndicesGiveTheirQ) {
  // Orthorhombic: Q = 2π √(h²/a² + k²/b² + l²/c²), by hand.
  const double q_101 = 2 * pi * std::sqrt(1 / (5.74 * 5.74) + 1 / (5.53 * 5.53));
  EXPECT_NEAR(position_with("", "hkl: [1, 0, -1]").q, q_101, 1e-13);
  EXPECT_NEAR(position_with("", "hkl: '1  0 -1'").q, q_101, 1e-13);
  const auto satellite = [](const std::string& line) {
    std::string text =
        job_text(6, "measurement: {lines: [{" + line + ", intensity: 1, sigma: 1}]}");
    text.replace(text.find("[[0, 0, 0]]"), 11, "[[0, 1/4, 0]]");
    return parse_job(text, "job.yaml").measurements[0].lines[0].position;
  };
  EXPECT_NEAR(satellite("hkl: [0, 1, 0], k_sign: -1").q, 2 * pi * 0.75 / 7.69, 1e-13);
  EXPECT_NEAR(satellite("hkl: [0, 1, 0], k_sign: 1").q, 2 * pi * 1.25 / 7.69, 1e-13);
  EXPECT_EQ(satellite("hkl: [0, 1, 0], k_sign: 1").text, "hkl 0 1 0 + k");
  EXPECT_EQ(satellite("hkl: [0, 1, 0], k_sign: -1").index->k_sign, -1);
}

TEST(LinesTest, WindowsFollowTheResolution) {
  const LinePosition relative = position_with("resolution: 0.01, ", "q: 2");
  EXPECT_NEAR(relative.q_low, 1.99, 1e-14);
  EXPECT_NEAR(relative.q_high, 2.01, 1e-14);
  const LinePosition standard = position_with("", "q: 2");
  EXPECT_NEAR(standard.q_high - standard.q_low, 2 * 0.008, 1e-14);
  // w = 0.16 alone: H = 0.4°; at 2θ = 60°, ΔQ/Q = cot 30° · 0.2° = √3 · 0.2π/180, by hand.
  const LinePosition caglioti =
      position_with("wavelength: 2, resolution: {u: 0, v: 0, w: 0.16}, ", "two_theta: 60");
  const double width = std::sqrt(3.0) * 0.2 * pi / 180;
  EXPECT_NEAR(caglioti.q_low, pi * (1 - width / 2), 1e-12);
  EXPECT_NEAR(caglioti.q_high, pi * (1 + width / 2), 1e-12);
}

TEST(LinesTest, TheCagliotiWindowIsThatOfTheMovedAngle) {
  // Q(2θ + H/2) − Q(2θ − H/2), computed directly; the two agree to third order in H.
  const double wavelength = 1.54;
  for (const double two_theta : {20.0, 60.0, 100.0, 140.0}) {
    const LinePosition line =
        position_with("wavelength: 1.54, resolution: {u: 0.01, v: -0.01, w: 0.02}, ",
                      "two_theta: " + std::to_string(two_theta));
    const double t = std::tan(two_theta * pi / 360);
    const double H = std::sqrt(0.01 * t * t - 0.01 * t + 0.02);
    const double low = q_of(PositionUnit::two_theta, two_theta - H / 2, wavelength);
    const double high = q_of(PositionUnit::two_theta, two_theta + H / 2, wavelength);
    EXPECT_NEAR(line.q_high - line.q_low, high - low, 1e-7);
  }
}

TEST(LinesTest, OwnWidthsAreFullAndInTheirUnit) {
  const LinePosition q = position_with("", "q: 2, width: 0.1");
  EXPECT_NEAR(q.q_low, 1.95, 1e-14);
  EXPECT_NEAR(q.q_high, 2.05, 1e-14);
  const LinePosition d = position_with("", "d: 3, width: 0.2");
  EXPECT_NEAR(d.q_low, 2 * pi / 3.1, 1e-14);
  EXPECT_NEAR(d.q_high, 2 * pi / 2.9, 1e-14);
  const LinePosition angle = position_with("wavelength: 2, ", "two_theta: 60, width: 2");
  EXPECT_NEAR(angle.q_low, 2 * pi * std::sin(29.5 * pi / 180), 1e-14);
  EXPECT_NEAR(angle.q_high, 2 * pi * std::sin(30.5 * pi / 180), 1e-14);
}

TEST(LinesTest, TolerancesBecomeTolerancesOfQ) {
  const auto tolerance = [](const std::string& line) {
    const Job job = job_with(
        6, "measurement: {wavelength: 2, lines: [{" + line + ", intensity: 1, sigma: 1}]}");
    return job.measurements[0].lines[0].tolerance_q.value_or(0);
  };
  EXPECT_EQ(tolerance("q: 2, tolerance: 0.01"), 0.01);
  EXPECT_NEAR(tolerance("d: 3, tolerance: 0.001"), 2 * pi / 9 * 0.001, 1e-15);
  // dQ/d2θ = (2π/λ) cos θ per radian.
  EXPECT_NEAR(tolerance("two_theta: 60, tolerance: 0.1"), pi * std::sqrt(3.0) / 2 * 0.1 * pi / 180,
              1e-15);
  EXPECT_EQ(tolerance("q: 2"), 0);
}

TEST(LinesTest, RangesRiseInQ) {
  const auto range = [](const std::string& text) {
    return job_with(6, "measurement: {wavelength: 2, scanned: [{" + text + ", below: 3}]}")
        .measurements[0]
        .scanned[0];
  };
  EXPECT_EQ(range("q: [0.4, 3]").q_min, 0.4);
  EXPECT_EQ(range("q: [0.4, 3]").q_max, 3);
  EXPECT_EQ(range("q: [0.4, 3]").below, 3);
  EXPECT_NEAR(range("d: [2, 4]").q_min, pi / 2, 1e-14);
  EXPECT_NEAR(range("d: [2, 4]").q_max, pi, 1e-14);
  EXPECT_NEAR(range("two_theta: [0, 60]").q_max, pi, 1e-14);
  EXPECT_EQ(range("two_theta: [0, 60]").q_min, 0);
}

}  // namespace
}  // namespace spinsieve

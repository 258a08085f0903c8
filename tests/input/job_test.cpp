#include "input/job.hpp"

#include <filesystem>
#include <fstream>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "job_text.hpp"

namespace spinsieve {
namespace {

using testing::ElementsAre;
using testing::HasSubstr;
using testing::IsEmpty;

std::vector<std::string> texts(const std::vector<Remark>& remarks) {
  std::vector<std::string> result;
  for (const Remark& remark : remarks) result.push_back(to_string(remark));
  return result;
}

TEST(JobTest, TheSmallJobIsSound) {
  const Job job = parse_job(job_text(), "folder/job.yaml");
  EXPECT_EQ(job.file, "folder/job.yaml");
  EXPECT_EQ(job.title, "");
  EXPECT_EQ(job.group.number(), 62);
  EXPECT_TRUE(job.cell_given);
  EXPECT_EQ(job.cell.b(), 7.69);
  ASSERT_EQ(job.magnetic_sites.size(), 1U);
  EXPECT_EQ(job.magnetic_sites[0].site.label, "M1");
  EXPECT_EQ(to_string(job.magnetic_sites[0].ion.ion), "Mn3+");
  EXPECT_EQ(to_string(job.magnetic_sites[0].site.position), "0, 0, 1/2");
  EXPECT_EQ(job.magnetic_sites[0].occupancy, 1);
  EXPECT_EQ(job.magnetic_sites[0].displacement.b_iso, 0);
  ASSERT_EQ(job.other_sites.size(), 1U);
  EXPECT_EQ(job.other_sites[0].element, "O");
  EXPECT_THAT(job.propagation, ElementsAre(Wavevector()));
  EXPECT_EQ(job.search.modulation, Modulation::automatic);
  EXPECT_EQ(job.search.arms, Arms::single);
  ASSERT_EQ(job.measurements.size(), 1U);
  EXPECT_EQ(job.measurements[0].lines.size(), 1U);
  EXPECT_THAT(texts(job.notes),
              ElementsAre(HasSubstr("folder/job.yaml:2:24: space group P n m a, number 62")));
  EXPECT_THAT(job.warnings, IsEmpty());
}

TEST(JobTest, EveryKeyOfTheContractIsRead) {
  const Job job = parse_job(R"(spinsieve: 1
title: specimen T-17, 4 K
crystal:
  space_group: P b n m
  cell: [5.53, 5.74, 7.69, 90, 90, 90]
magnetic_sites:
  - {label: M1, ion: Mn(III), position: [1/2, 0, 0], b_iso: 0.3, moment_limit: 4, occupancy: 0.9}
  - label: R1
    ion: Ho3+
    position: [0.98, 0.07, 1/4]
    u_ij: [0.01, 0.02, 0.03, 0.001, 0, 0]
    lande_g: 1.25
    form_factor: {j0: [1, 2, 3, 4, 5, 6, 7], j2: [0.1, 2, 3, 4, 5, 6, 0]}
other_sites:
  - {label: O1, element: O, position: [0.1, 0.47, 1/4], b_iso: 0.4, occupancy: 1}
propagation: [[0, 0, 1/2], [0, 0.25, 0], [0, u, 1/2]]
modulation: incommensurate
measurement:
  - sample: powder
    wavelength: 2.41
    temperature: 4
    resolution: {u: 0.1, v: -0.1, w: 0.2}
    intensity: integrated
    scale: 12.5
    zero_shift: 0.05
    lines:
      - {q: 1.157, intensity: 310, sigma: 9, tolerance: 0.002}
      - {d: 4.5, above: 20, foreign: true}
      - {two_theta: 40, intensity: -1, sigma: 2, width: 0.4}
      - {hkl: [1, 0, 0], k_sign: -1, k: 2, intensity: 4, sigma: 1}
    absences:
      - {q: 0.817, below: 6}
    scanned:
      - {q: [0.4, 3.0], below: 6}
  - sample: single_crystal
    flight: {two_theta: 145}
    lines: [{hkl: [0, 1, 1], k_sign: 0, intensity: 4, sigma: 1}]
arrangement:
  - {k: 1, position: [1/2, 0, 0], moment: [[0, 0], [3.7, 0], [0, 0]]}
  - {k: 2, position: [0.5, 0, 0.5], moment: [1, [0, -1], 0]}
search: {arms: all, combine: 2, directions: maximal, equal_moments: true}
locate: {foreign: 1, cell_tolerance: 0.001, count: 5}
)",
                            "job.yaml");
  EXPECT_EQ(job.title, "specimen T-17, 4 K");
  EXPECT_EQ(job.group.number(), 62);
  EXPECT_EQ(job.group.setting(), "cab");
  ASSERT_EQ(job.magnetic_sites.size(), 2U);
  EXPECT_EQ(job.magnetic_sites[0].moment_limit, 4);
  EXPECT_EQ(job.magnetic_sites[0].occupancy, 0.9);
  EXPECT_EQ(job.magnetic_sites[0].displacement.b_iso, 0.3);
  EXPECT_EQ(to_string(job.magnetic_sites[1].site.position), "49/50, 7/100, 1/4");
  EXPECT_EQ((*job.magnetic_sites[1].displacement.u_ij)[3], 0.001);
  EXPECT_EQ(job.magnetic_sites[1].ion.lande_g, 1.25);
  EXPECT_EQ((*job.magnetic_sites[1].ion.j0)[6], 7);
  EXPECT_EQ((*job.magnetic_sites[1].ion.j2)[0], 0.1);
  EXPECT_EQ(job.magnetic_sites[1].ion.place.line(), 9);
  ASSERT_EQ(job.propagation.size(), 3U);
  EXPECT_EQ(to_string(job.propagation[1]), "0, 1/4, 0");
  EXPECT_EQ(to_string(job.propagation[2]), "0, u, 1/2");
  EXPECT_EQ(job.search.modulation, Modulation::incommensurate);
  EXPECT_EQ(job.search.arms, Arms::all);
  EXPECT_EQ(job.search.combine, 2);
  EXPECT_EQ(job.search.directions, DirectionFilter::maximal);
  EXPECT_TRUE(job.search.equal_moments);
  EXPECT_EQ(job.locate.foreign, 1);
  EXPECT_EQ(job.locate.cell_tolerance, 0.001);
  EXPECT_EQ(job.locate.count, 5);
  ASSERT_EQ(job.measurements.size(), 2U);
  const Measurement& first = job.measurements[0];
  EXPECT_EQ(first.temperature_kelvin, 4);
  EXPECT_EQ(std::get<ConstantWavelength>(first.geometry).wavelength_angstrom, 2.41);
  EXPECT_EQ(std::get<Caglioti>(first.resolution).v, -0.1);
  EXPECT_EQ(first.intensity, IntensityKind::integrated);
  EXPECT_EQ(first.scale, ScaleKind::fixed);
  EXPECT_EQ(first.scale_value, 12.5);
  EXPECT_EQ(first.zero_shift_degrees, 0.05);
  ASSERT_EQ(first.lines.size(), 4U);
  EXPECT_EQ(first.lines[0].tolerance_q, 0.002);
  EXPECT_EQ(first.lines[1].above, 20);
  EXPECT_TRUE(first.lines[1].foreign);
  EXPECT_EQ(first.lines[2].intensity, -1);
  EXPECT_EQ(first.lines[3].position.index->wavevector, 1U);
  EXPECT_EQ(first.lines[3].position.text, "hkl 1 0 0 - k2");
  EXPECT_EQ(first.absences.size(), 1U);
  EXPECT_EQ(first.scanned.size(), 1U);
  const Measurement& second = job.measurements[1];
  EXPECT_EQ(second.sample, Sample::single_crystal);
  EXPECT_EQ(std::get<Flight>(second.geometry).two_theta_degrees, 145);
  EXPECT_EQ(std::get<double>(second.resolution), default_resolution);
  EXPECT_EQ(second.place.line(), 35);
  ASSERT_EQ(job.arrangement.size(), 2U);
  EXPECT_EQ(job.arrangement[0].moment[1], 3.7);
  EXPECT_EQ(job.arrangement[1].wavevector, 1U);
  EXPECT_EQ(job.arrangement[1].site, 0U);
  EXPECT_EQ(to_string(job.arrangement[1].position), "1/2, 0, 1/2");
  EXPECT_EQ(job.arrangement[1].moment[1], (std::complex<double>{0, -1}));
  EXPECT_THAT(job.warnings, IsEmpty());
}

TEST(JobTest, SpaceGroupsComeByNumberSymbolAndHallNumber) {
  const struct {
    const char* written;
    int number;
    int hall;
    const char* source;
  } cases[] = {
      {"62", 62, 292, "International Tables B (2010), A1.4.2.7"},
      {"Pnma", 62, 292, "the same"},
      {"{hall_number: 292}", 62, 292, "the same"},
      {"-P 2ac 2n", 62, 292, "the same"},
      {"P b n m", 62, 294, "the same, setting cab"},
  };
  for (const auto& [written, number, hall, source] : cases) {
    SCOPED_TRACE(source);
    const Job job = parse_job(
        std::string("spinsieve: 1\ncrystal: {space_group: ") + written + "}\n", "job.yaml");
    EXPECT_EQ(job.group.number(), number) << written;
    EXPECT_EQ(job.group.hall_number(), hall) << written;
    EXPECT_FALSE(job.cell_given);
  }
}

TEST(JobTest, PositionsNearSpecialOnesAreMovedAndToldSo) {
  const Job job =
      job_with(3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0.00005, 0, 0.5]}]");
  EXPECT_EQ(to_string(job.magnetic_sites[0].site.position), "0, 0, 1/2");
  ASSERT_EQ(job.notes.size(), 2U);
  EXPECT_EQ(
      to_string(job.notes[1]),
      "job.yaml:3:51: site M1 was moved from (1/20000, 0, 1/2) to the special position (0, 0, "
      "1/2)");
}

TEST(JobTest, CutThirdsAreOfferedNotGuessed) {
  const Job site =
      job_with(4, "other_sites: [{label: O1, element: O, position: [0.333, 1/4, 0.07]}]");
  EXPECT_EQ(to_string(site.other_sites[0].site.position), "333/1000, 1/4, 7/100");
  EXPECT_EQ(
      to_string(site.notes.back()),
      "job.yaml:4:50: coordinate '0.333' of O1 is taken as 333/1000 exactly; write 1/3 if that "
      "is meant");
  const Job k = job_with(5, "propagation: [[0.3333, 0, 0]]");
  EXPECT_EQ(to_string(k.propagation[0]), "3333/10000, 0, 0");
  EXPECT_THAT(texts(k.notes),
              testing::Contains("job.yaml:5:16: component '0.3333' is taken as 3333/10000 exactly; "
                                "write 1/3 if that is meant"));
  EXPECT_EQ(to_string(k.notes.back()),
            "job.yaml:5:15: k = (3333/10000, 0, 0) is taken as incommensurate: its common "
            "denominator is above 12");
}

TEST(JobTest, PropagationMayBeLeftOutOrSearched) {
  EXPECT_THAT(parse_job("spinsieve: 1\ncrystal: {space_group: 62}\n", "job.yaml").propagation,
              IsEmpty());
  const Job job = job_with(5, "propagation: locate");
  EXPECT_TRUE(job.locate_propagation);
  EXPECT_THAT(job.propagation, IsEmpty());
}

TEST(JobTest, LinesWithoutStrengthAreEnoughToSearchTheWavevector) {
  EXPECT_NO_THROW(
      parse_job("spinsieve: 1\n"
                "crystal: {space_group: 62, cell: [5.74, 7.69, 5.53, 90, 90, 90]}\n"
                "measurement: {lines: [{q: 1.1}, {q: 1.2, above: 3}]}\n",
                "job.yaml"));
}

TEST(JobTest, DoubtsBecomeWarnings) {
  const Job limit = job_with(
      3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 1/2], moment_limit: 4}]");
  EXPECT_THAT(
      texts(limit.warnings),
      ElementsAre("job.yaml:3:26: moment_limit of M1 has no content: every scale is free, so "
                  "that only ratios of moments are measured"));
  const Job star = parse_job(
      "spinsieve: 1\ncrystal: {space_group: 123, cell: [4, 4, 6, 90, 90, 90]}\n"
      "propagation: [[1/2, 0, 0], [0, 1/2, 0]]\n",
      "job.yaml");
  EXPECT_THAT(
      texts(star.warnings),
      ElementsAre("job.yaml:3:28: propagation vectors 1 and 2 belong to one star; 'arms: all' "
                  "treats a star as a whole"));
  const Job twice = job_with(6,
                             "measurement: {lines: [{q: 1, intensity: 3, sigma: 1}, {q: 1.0, "
                             "intensity: 2, sigma: 1}]}");
  EXPECT_THAT(
      texts(twice.warnings),
      ElementsAre("job.yaml:6:55: a second line at q 1.0; the two share one window and their "
                  "intensities add"));
}

TEST(JobTest, ElementsMayShareASpotWhenThereIsRoom) {
  const Job job = job_with(4,
                           "other_sites: [{label: La, element: La, position: [0.02, 1/4, 0.99], "
                           "occupancy: 0.7}, {label: Sr, element: Sr, position: [0.02, 1/4, 0.99], "
                           "occupancy: 0.3}]");
  EXPECT_EQ(job.other_sites.size(), 2U);
}

TEST(JobTest, FilesAreFoundBesideTheJob) {
  const std::filesystem::path folder =
      std::filesystem::path(testing::TempDir()) / "spinsieve_job_test";
  std::filesystem::create_directories(folder);
  std::ofstream(folder / "lines.csv") << "q,intensity,sigma\n1.157,310,9\n1.6,20,3\n";
  std::ofstream(folder / "job.yaml") << job_text(6, "measurement: {lines: lines.csv}");
  const Job job = read_job((folder / "job.yaml").string());
  ASSERT_EQ(job.measurements[0].lines.size(), 2U);
  EXPECT_EQ(job.measurements[0].lines[1].position.q, 1.6);
  EXPECT_EQ(job.measurements[0].lines[1].position.place.file(), (folder / "lines.csv").string());
  EXPECT_EQ(job.measurements[0].lines[1].position.place.line(), 3);
  std::filesystem::remove_all(folder);
}

}  // namespace
}  // namespace spinsieve

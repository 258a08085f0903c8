#include <filesystem>
#include <fstream>
#include <span>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "input/text.hpp"
#include "job_text.hpp"

namespace spinsieve {
namespace {

/// A line of the small job, what stands there instead, and the whole message.
struct Case {
  std::size_t line;
  const char* text;
  const char* message;
};

void check(std::span<const Case> cases) {
  for (const Case& c : cases)
    EXPECT_EQ(job_fault(job_text(c.line, c.text)), std::string("job.yaml:") + c.message) << c.text;
}

TEST(JobErrorsTest, TopLevel) {
  const Case cases[] = {
      {1, "title: x",
       "1:1: error: the key 'spinsieve' is missing; a job starts with 'spinsieve: 1'"},
      {1, "spinsieve: 2", "1:12: error: version '2' of the job file is unknown; accepted is 1"},
      {2, "", "1:1: error: the job needs the key 'crystal'"},
      {5, "propagaton: [[0, 0, 0]]",
       "5:1: error: unknown key 'propagaton' in the job; the nearest known key is 'propagation'"},
      {5, "cell: [1, 1, 1, 90, 90, 90]",
       "5:1: error: unknown key 'cell' in the job; it belongs in crystal"},
      {5, "title: [1, 2]", "5:8: error: title must be a single value, not a list"},
      {5, "modulation: yes",
       "5:13: error: modulation 'yes' is unknown; accepted is auto, commensurate or "
       "incommensurate"},
      {5, "search: {arm: all}",
       "5:10: error: unknown key 'arm' in search; the nearest known key is 'arms'"},
      {5, "search: {arms: both}", "5:16: error: arms 'both' is unknown; accepted is single or all"},
      {5, "search: {combine: 0}",
       "5:19: error: combine '0' is out of range; accepted is an integer from 1 to 8"},
      {5, "search: {equal_moments: yes}",
       "5:25: error: equal_moments 'yes' is unknown; accepted is true or false"},
      {5, "locate: {count: 1.5}",
       "5:17: error: count '1.5' is not an integer; accepted is a number such as 2"},
      {5, "locate: {cell_tolerance: -1}",
       "5:26: error: cell_tolerance '-1' is out of range; accepted is a number from 0 and up to "
       "0.1"},
      {5, "locate: 3",
       "5:9: error: locate must be a mapping with keys such as 'foreign', not a single value"},
  };
  check(cases);
  EXPECT_EQ(job_fault("just text"),
            "job.yaml:1:1: error: a job is a mapping of keys to values; it starts with 'spinsieve: "
            "1'");
  EXPECT_EQ(job_fault("- 1\n"),
            "job.yaml:1:1: error: a job is a mapping of keys to values; it starts with 'spinsieve: "
            "1'");
}

TEST(JobErrorsTest, Crystal) {
  const Case cases[] = {
      {2, "crystal: 62",
       "2:10: error: crystal must be a mapping with keys such as 'space_group', not a single "
       "value"},
      {2, "crystal: {cell: [1, 1, 1, 90, 90, 90]}",
       "2:10: error: crystal needs the key 'space_group'"},
      {2, "crystal: {space_group: 231, cell: [1, 1, 1, 90, 90, 90]}",
       "2:24: error: space-group number 231; it must lie within 1 to 230"},
      {2, "crystal: {space_group: [62]}",
       "2:24: error: space_group must be a number, a symbol or {hall_number: 292}, not a list"},
      {2, "crystal: {space_group: {hall_number: 531}}",
       "2:38: error: hall_number '531' is out of range; accepted is an integer from 1 to 530"},
      {2, "crystal: {space_group: {hall: 5}}",
       "2:25: error: unknown key 'hall' in space_group; the nearest known key is 'hall_number'"},
      {2, "crystal: {space_group: 62, cell: [5.74, 7.69, 5.53]}",
       "2:34: error: cell must be a list of 6 entries, not of 3"},
      {2, "crystal: {space_group: 62, cell: 5.74}",
       "2:34: error: cell must be a list of 6 entries, not a single value"},
      {2, "crystal: {space_group: 62, cell: [5.74, .nan, 5.53, 90, 90, 90]}",
       "2:41: error: cell length '.nan' is not a number; accepted is a decimal such as 2.41"},
      {2, "crystal: {space_group: 62, cell: [5.74, nan, 5.53, 90, 90, 90]}",
       "2:41: error: cell length 'nan' is not a finite number; accepted is a decimal such as 2.41"},
      {2, "crystal: {space_group: 62, cell: [5.74, -1, 5.53, 90, 90, 90]}",
       "2:41: error: cell length '-1' is out of range; accepted is a number above 0 and up to "
       "10000 "
       "Å"},
      {2, "crystal: {space_group: 62, cell: [5.74, 7.69, 5.53, 90, 180, 90]}",
       "2:57: error: cell angle '180' is out of range; accepted is a number above 0 and below 180 "
       "degrees"},
      {2, "crystal: {space_group: 62}",
       "2:1: error: crystal needs the key 'cell' when there are "
       "sites"},
  };
  check(cases);
  EXPECT_THAT(
      job_fault(job_text(2, "crystal: {space_group: 62, cell: [5.7, 7.6, 5.5, 90, 95, 90]}")),
      testing::StartsWith("job.yaml:2:34: error: cell 5.7, 7.6, 5.5, 90, 95, 90 does not fit "));
  EXPECT_THAT(
      job_fault(job_text(2, "crystal: {space_group: 166, cell: [5, 5, 5, 55, 55, 55]}")),
      testing::AllOf(testing::StartsWith("job.yaml:2:35: error: "), testing::HasSubstr(":R'")));
  EXPECT_THAT(job_fault(job_text(2, "crystal: {space_group: Pnmx, cell: [5, 6, 7, 90, 90, 90]}")),
              testing::StartsWith("job.yaml:2:24: error: "));
}

TEST(JobErrorsTest, Sites) {
  const Case cases[] = {
      {3, "magnetic_sites: {label: M1}",
       "3:17: error: magnetic_sites must be a list, not a mapping"},
      {3, "magnetic_sites: []",
       "3:17: error: magnetic_sites is empty; leave the key out or give an entry"},
      {3, "magnetic_sites: [M1]",
       "3:18: error: a magnetic site must be a mapping with keys such as 'label', not a single "
       "value"},
      {3, "magnetic_sites: [{label: M1, position: [0, 0, 0]}]",
       "3:18: error: a magnetic site needs the key 'ion'"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+}]",
       "3:18: error: a magnetic site needs the key 'position'"},
      {3, "magnetic_sites: [{label: M 1, ion: Mn3+, position: [0, 0, 0]}]",
       "3:26: error: label 'M 1' is not accepted; a label has 1 to 24 characters without blanks, "
       "commas and quotes"},
      {3, "magnetic_sites: [{label: M1, ion: mn3+, position: [0, 0, 0]}]",
       "3:35: error: ion 'mn3+' does not begin with an element symbol such as Mn; accepted are "
       "Mn3+, "
       "Mn+3, Mn(III), Fe"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, positon: [0, 0, 0]}]",
       "3:41: error: unknown key 'positon' in a magnetic site; the nearest known key is "
       "'position'"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0]}]",
       "3:51: error: position must be a list of 3 entries, not of 2"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 1/0, 0]}]",
       "3:55: error: position '1/0' has a zero denominator"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, x, 0]}]",
       "3:55: error: position 'x' is not a number; accepted are 2, -1/3, 0.25"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 1e6, 0]}]",
       "3:55: error: position '1e6' is out of range; accepted is a fraction or a decimal of at "
       "most "
       "9 digits within ±1000"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], b_iso: -0.1}]",
       "3:69: error: b_iso '-0.1' is out of range; accepted is a number from 0 and up to 100 Å²"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], occupancy: 1.2}]",
       "3:73: error: occupancy '1.2' is out of range; accepted is a number above 0 and up to 1"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], occupancy: 0}]",
       "3:73: error: occupancy '0' is out of range; accepted is a number above 0 and up to 1"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], b_iso: 1, u_ij: [1]}]",
       "3:72: error: 'u_ij' beside 'b_iso' in a magnetic site; accepted is one of b_iso or u_ij"},
      {3,
       "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], u_ij: [0.01, 0.01, 0.01, "
       "0.02, "
       "0, 0]}]",
       "3:68: error: u_ij is not positive definite, so that an amplitude would be imaginary; "
       "accepted are U11 U22 U33 U12 U13 U23 in Å² of an ellipsoid"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], lande_g: 1, c2: 0}]",
       "3:74: error: 'c2' beside 'lande_g' in a magnetic site; accepted is one of lande_g, spin_g "
       "or "
       "c2"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], form_factor: {j2: [1]}}]",
       "3:75: error: form_factor needs the key 'j0'"},
      {3,
       "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], form_factor: {j0: [1, 2]}}]",
       "3:80: error: j0 must be a list of 7 entries, not of 2"},
      {3, "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], moment_limit: inf}]",
       "3:76: error: moment_limit 'inf' is not a finite number; accepted is a decimal such as "
       "2.41"},
      {3, "magnetic_sites: [{label: O1, ion: Mn3+, position: [0, 0, 0]}]",
       "4:23: error: the label 'O1' appears twice; it is on line 3 already"},
      {4, "other_sites: [{label: O1, element: O2-, position: [0.49, 1/4, 0.07]}]",
       "4:36: error: element 'O2-' is unknown; accepted is a symbol such as O, or an isotope such "
       "as "
       "7Li, without charge"},
      {4, "other_sites: [{label: O1, element: O, position: [1/2, 0, 0]}]",
       "4:23: error: sites M1 and O1 stand on the same spot; accepted are sites apart, or "
       "occupancies that sum to at most 1"},
      {4,
       "other_sites: [{label: O1, element: O, position: [0.49, 1/4, 0.07]}, {label: O2, element: "
       "O, position: [0.45, 1/4, 0.07]}]",
       "4:77: error: sites O1 and O2 are 0.23 Å apart; at least 0.50 Å are needed between two "
       "sites"},
      {4, "other_sites: [{label: O1, element: O, position: [0.02, 0, 0.49]}]",
       "4:23: error: site O1 at 1/50, 0, 49/100: two of its symmetry-equivalent atoms are 0.25 Å "
       "apart; at least 0.50 Å are needed, write 0, 0, 1/2 for the special position nearby"},
      {3,
       "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 0], occupancy: 0.5}, {label: M2, "
       "ion: Fe3+, position: [0, 1/2, 0], occupancy: 0.5}]",
       "3:87: error: sites M1 and M2 stand on the same spot; accepted is one magnetic site for a "
       "spot"},
  };
  check(cases);
  // 0.333 for 1/3 splits the site 2c of P-3m1-like groups into atoms 0.0x Å apart.
  EXPECT_THAT(
      job_fault("spinsieve: 1\ncrystal: {space_group: 164, cell: [5, 5, 6, 90, 90, 120]}\n"
                "magnetic_sites: [{label: M1, ion: Mn3+, position: [0.333, 0.667, 0.2]}]\n"),
      testing::AllOf(testing::StartsWith("job.yaml:3:26: error: "), testing::HasSubstr("1/3")));
}

TEST(JobErrorsTest, Propagation) {
  const Case cases[] = {
      {5, "propagation: none",
       "5:14: error: propagation 'none' is unknown; accepted is a list of vectors such as [[0, 0, "
       "1/2]], or locate"},
      {5, "propagation: [0, 0, 1/2]",
       "5:15: error: a propagation vector is a list of 3 components; write [[0, 0, 1/2]]"},
      {5, "propagation: []",
       "5:14: error: propagation is empty; leave the key out or give an entry"},
      {5, "propagation: [[0, 0]]",
       "5:15: error: a propagation vector must be a list of 3 entries, not of 2"},
      {5, "propagation: [[0, x, 0]]",
       "5:19: error: 'x' is not a component of a wavevector; accepted are 1/2, 0.25, u, 1/2-u, 2u"},
      {5, "propagation: [[0, nan, 0]]",
       "5:19: error: 'nan' is not a component of a wavevector; accepted are 1/2, 0.25, u, 1/2-u, "
       "2u"},
      {5, "propagation: [[0, 1/0, 0]]", "5:19: error: '1/0' has a zero denominator"},
      {5, "propagation: [[0, 0 5, 0]]",
       "5:19: error: '0 5' is not a component of a wavevector; accepted are 1/2, 0.25, u, 1/2-u, "
       "2u"},
      {5, "propagation: [[0, [1], 0]]",
       "5:19: error: a component of a propagation vector must be a single value, not a list"},
      {5, "propagation: [[0, 0.1234567891, 0]]",
       "5:19: error: component '0.1234567891' of a propagation vector is out of range; accepted is "
       "a "
       "fraction or a decimal of at most 9 digits within ±1000"},
      {5, "propagation: [[u-u, 0, 0]]",
       "5:15: error: the parameter u cancels in k = (0, 0, 0); leave it out"},
      {5, "propagation: [[u+v, 0, 0]]",
       "5:15: error: k = (u+v, 0, 0) has 2 free parameters but varies in 1 direction; accepted is "
       "one parameter for each, such as (u, u, 0) or (u, v, 0)"},
      {5, "propagation: [[u+w, v, u+v+w]]",
       "5:15: error: k = (u+w, v, u+v+w) has 3 free parameters but varies in 2 directions; "
       "accepted "
       "is one parameter for each, such as (u, u, 0) or (u, v, 0)"},
      {5, "propagation: [[1/4, 0, 0], [3/4, 1, 0]]",
       "5:28: error: propagation vectors 1 and 2 are the same up to a reciprocal-lattice vector "
       "and "
       "a sign; leave one out"},
      {5, "modulation: commensurate\npropagation: [[0, 0.2815, 0]]",
       "6:15: error: k = (0, 563/2000, 0) has the common denominator 2000; commensurate is "
       "accepted "
       "up to 1000"},
      {5, "modulation: commensurate\npropagation: [[0, u, 0]]",
       "6:15: error: k = (0, u, 0) has free parameters, so that it is not commensurate; give "
       "numbers "
       "or another modulation"},
  };
  check(cases);
}

TEST(JobErrorsTest, MeasurementSettings) {
  const Case cases[] = {
      {6, "measurement: powder",
       "6:14: error: a measurement must be a mapping with keys such as 'sample', not a single "
       "value"},
      {6, "measurement: {sampel: powder}",
       "6:15: error: unknown key 'sampel' in a measurement; the nearest known key is 'sample'"},
      {6, "measurement: {polarised: true}",
       "6:15: error: the key 'polarised' of a measurement is reserved and not acted on yet; leave "
       "it "
       "out"},
      {6, "measurement: {pattern: x.dat}",
       "6:15: error: the key 'pattern' of a measurement is reserved and not acted on yet; leave it "
       "out"},
      {6, "measurement: {sample: liquid}",
       "6:23: error: sample 'liquid' is unknown; accepted is powder or single_crystal"},
      {6, "measurement: {wavelength: 0}",
       "6:27: error: wavelength '0' is out of range; accepted is a number above 0 and up to 100 Å"},
      {6, "measurement: {wavelength: 2, flight: {two_theta: 145}}",
       "6:30: error: 'flight' beside 'wavelength' in a measurement; accepted is one of wavelength "
       "or "
       "flight"},
      {6, "measurement: {flight: {two_theta: 180}}",
       "6:35: error: two_theta '180' is out of range; accepted is a number above 0 and below 180 "
       "degrees"},
      {6, "measurement: {temperature: -1}",
       "6:28: error: temperature '-1' is out of range; accepted is a number from 0 and up to "
       "100000 "
       "K"},
      {6, "measurement: {resolution: 0}",
       "6:27: error: resolution '0' is out of range; accepted is a number above 0 and up to 0.5"},
      {6, "measurement: {resolution: {u: 1, v: 0, w: 1}}",
       "6:27: error: resolution {u, v, w} needs the key 'wavelength'; without it, accepted is the "
       "full width Δd/d, such as 0.008"},
      {6, "measurement: {wavelength: 2, resolution: {u: 1, w: 1}}",
       "6:42: error: resolution needs the key 'v'"},
      {6,
       "measurement: {wavelength: 2, resolution: {u: 0, v: 0, w: -1}, lines: [{two_theta: 60, "
       "intensity: 1, sigma: 1}]}",
       "6:42: error: resolution {u, v, w} gives a negative H² at q = 3.141593; H² = u tan²θ + v "
       "tanθ "
       "+ w"},
      {6, "measurement: {intensity: peak}",
       "6:26: error: intensity 'peak' is unknown; accepted is lorentz_removed or integrated"},
      {6, "measurement: {intensity: integrated}",
       "6:26: error: intensity 'integrated' needs the key 'wavelength' or 'flight' for the Lorentz "
       "factor"},
      {6, "measurement: {scale: absolute}",
       "6:22: error: scale 'absolute' is unknown; accepted is free, nuclear or a number above 0 "
       "(intensity per barn)"},
      {6, "measurement: {scale: 0}",
       "6:22: error: scale '0' is out of range; accepted is a number above 0"},
      {6, "measurement: {scale: nuclear}",
       "6:15: error: scale 'nuclear' needs the key "
       "'nuclear_lines'"},
      {6, "measurement: {nuclear_lines: [{hkl: [1, 0, 0], intensity: 1, sigma: 1}]}",
       "6:15: error: nuclear_lines are used only with 'scale: nuclear'; set it or leave them out"},
      {6, "measurement: {zero_shift: 0.1}", "6:27: error: zero_shift needs the key 'wavelength'"},
      {6, "measurement: []",
       "6:14: error: measurement is empty; leave the key out or give an entry"},
  };
  check(cases);
  EXPECT_EQ(job_fault("spinsieve: 1\ncrystal: {space_group: 1}\nmeasurement: {wavelength: 2}\n"),
            "job.yaml:3:14: error: a measurement needs the key 'cell' of crystal");
}

TEST(JobErrorsTest, Lines) {
  const struct {
    const char* settings;
    const char* line;
    const char* message;  // Its column is counted from the line.
    int column;
  } cases[] = {
      {"", "{intensity: 1, sigma: 1}", "a line needs a position: q, d, two_theta or hkl", 1},
      {"", "{q: 1, d: 2, intensity: 1, sigma: 1}",
       "'d' beside 'q' in a line; accepted is one of q, d, two_theta or hkl", 8},
      {"", "{q: 1, sigma: 1}", "sigma without an intensity", 8},
      {"", "{q: 1}", "a line needs the key 'intensity', or 'above' when it is only seen", 1},
      {"", "{q: 1, intensity: 1}", "a line needs the key 'sigma'", 1},
      {"", "{q: 1, intensity: 1, sigma: -9}",
       "sigma '-9' is out of range; accepted is a number above 0", 29},
      {"", "{q: 1, intensity: 1, sigma: 0}",
       "sigma '0' is out of range; accepted is a number above 0", 29},
      {"", "{q: 1, intensity: nan, sigma: 1}",
       "intensity 'nan' is not a finite number; accepted is a decimal such as 2.41", 19},
      {"", "{q: 1, intensity: [1, 2], sigma: 1}", "intensity must be a number, not a list", 19},
      {"", "{q: 1, intensity: 1, above: 3, sigma: 1}",
       "'above' beside 'intensity' in a line; accepted is one of intensity or above", 22},
      {"", "{q: 1, above: 3, sigma: 1}", "sigma belongs to an intensity, not to 'above'", 18},
      {"", "{q: -1, intensity: 1, sigma: 1}",
       "q '-1' is out of range; accepted is a number above 0 and up to 1000 Å⁻¹", 5},
      {"", "{two_theta: 20, intensity: 1, sigma: 1}",
       "two_theta needs the key 'wavelength' of the measurement; accepted without it are q and d",
       2},
      {"wavelength: 12, ", "{q: 1.157, intensity: 1, sigma: 1}",
       "Q = 1.157 Å⁻¹ is not reached with the wavelength 12 Å; accepted is Q up to 4π/λ = 1.0471 "
       "Å⁻¹",
       5},
      {"wavelength: 12, ", "{hkl: [2, 0, 0], intensity: 1, sigma: 1}",
       "Q = 2.1893 Å⁻¹ is not reached with the wavelength 12 Å; accepted is Q up to 4π/λ = 1.0471 "
       "Å⁻¹",
       7},
      {"", "{hkl: [0, 0, 0], intensity: 1, sigma: 1}", "this reflection has Q = 0, the direct beam",
       2},
      {"", "{hkl: [1, 0], intensity: 1, sigma: 1}", "hkl must be a list of 3 entries, not of 2", 7},
      {"", "{hkl: 1 0, intensity: 1, sigma: 1}",
       "hkl '1 0' must be three integers such as '1 0 -1'", 7},
      {"", "{hkl: [1, 0.5, 0], intensity: 1, sigma: 1}",
       "hkl '0.5' is not an integer; accepted is a number such as 2", 11},
      {"", "{hkl: [1, 0, 0], k_sign: 2, intensity: 1, sigma: 1}",
       "k_sign '2' is out of range; accepted is an integer from -1 to 1", 26},
      {"", "{hkl: [1, 0, 0], width: 1, intensity: 1, sigma: 1}",
       "width is accepted only beside q, d or two_theta", 18},
      {"", "{q: 1, k_sign: 1, intensity: 1, sigma: 1}", "'k_sign' is accepted only beside hkl", 8},
      {"", "{q: 1, width: 2.5, intensity: 1, sigma: 1}",
       "width '2.5' reaches below zero at this position; accepted is a full width below 2 Å⁻¹", 15},
      {"", "{q: 1, tolerance: 0, intensity: 1, sigma: 1}",
       "tolerance '0' is out of range; accepted is a number above 0 and up to 0.5 Å⁻¹", 19},
      {"", "{q: 1, tolerance: 0.6, intensity: 1, sigma: 1}",
       "tolerance '0.6' is out of range; accepted is a number above 0 and up to 0.5 Å⁻¹", 19},
      {"", "{q: 1, foreign: maybe, intensity: 1, sigma: 1}",
       "foreign 'maybe' is unknown; accepted is true or false", 17},
      {"", "{q: 1, intenisty: 1, sigma: 1}",
       "unknown key 'intenisty' in a line; the nearest known key is 'intensity'", 8},
      {"sample: single_crystal, ", "{q: 1, intensity: 1, sigma: 1}",
       "a line of a single crystal is given by hkl and k_sign, not by its q", 2},
  };
  for (const auto& [settings, line, message, column] : cases) {
    const std::string before = std::string("measurement: {") + settings + "lines: [";
    const std::size_t shift = characters(before);
    EXPECT_EQ(job_fault(job_text(6, before + line + "]}")),
              "job.yaml:6:" + std::to_string(shift + static_cast<std::size_t>(column)) +
                  ": error: " + message)
        << line;
  }
  const auto with_k = [](const char* k, const char* line) {
    const std::string text = job_text(5, std::string("propagation: ") + k);
    return job_fault(text.substr(0, text.find("measurement:")) + "measurement: {lines: [" + line +
                     "]}");
  };
  EXPECT_EQ(with_k("[[0, 1/2, 0]]", "{hkl: [1, 0, 0], above: 1}"),
            "job.yaml:6:24: error: hkl needs the key 'k_sign' (-1, 0 or 1) beside it when k is not "
            "zero");
  EXPECT_EQ(
      with_k("[[0, 1/2, 0], [0, 0, 1/2]]", "{hkl: [1, 0, 0], k_sign: 1, above: 1}"),
      "job.yaml:6:24: error: hkl needs the key 'k', the number of its propagation vector, when "
      "there are several");
  EXPECT_EQ(with_k("[[0, u, 0]]", "{hkl: [1, 0, 0], k_sign: 1, above: 1}"),
            "job.yaml:6:24: error: hkl with a k_sign needs a propagation vector without free "
            "parameters, not (0, u, 0)");
  EXPECT_EQ(with_k("locate", "{hkl: [1, 0, 0], k_sign: 1, above: 1}"),
            "job.yaml:6:24: error: hkl with a k_sign needs a propagation vector; accepted without "
            "one are q, d and two_theta");
}

TEST(JobErrorsTest, AbsencesAndRanges) {
  const Case cases[] = {
      {6, "measurement: {absences: [{q: 1}]}", "6:26: error: an absence needs the key 'below'"},
      {6, "measurement: {absences: [{q: 1, below: 0}]}",
       "6:40: error: below '0' is out of range; accepted is a number above 0"},
      {6, "measurement: {absences: {q: 1, below: 1}}",
       "6:25: error: absences must be a list of entries or the name of a CSV file, not a mapping"},
      {6, "measurement: {scanned: [{q: 1, below: 1}]}",
       "6:29: error: q must be a list of 2 entries, not a single value"},
      {6, "measurement: {scanned: [{q: [3, 1], below: 1}]}",
       "6:29: error: range [3, 1] does not rise; accepted is the smaller end first"},
      {6, "measurement: {scanned: [{q: [1, 3]}]}",
       "6:25: error: a scanned range needs the key 'below'"},
      {6, "measurement: {wavelength: 12, scanned: [{q: [0.4, 3], below: 1}]}",
       "6:51: error: Q = 3 Å⁻¹ is not reached with the wavelength 12 Å; accepted is Q up to 4π/λ = "
       "1.0471 Å⁻¹"},
  };
  check(cases);
}

TEST(JobErrorsTest, Arrangement) {
  const std::string before = "propagation: [[0, 0, 1/2]]\narrangement: ";
  const struct {
    const char* text;
    const char* message;
  } cases[] = {
      {"[{position: [0.1, 0, 1/2], moment: [1, 0, 0]}]",
       "6:26: error: no magnetic atom is at (1/10, 0, 1/2); accepted are atoms equivalent to M1 at "
       "(0, 0, 1/2)"},
      {"[{position: [0, 0, 1/2], moment: [1, 0]}]",
       "6:47: error: moment must be a list of 3 entries, not of 2"},
      {"[{position: [0, 0, 1/2], moment: [1, [0, 1], 0]}]",
       "6:55: error: imaginary part '1', but with k = (0, 0, 1/2) every moment is real (2k is a "
       "reciprocal-lattice vector); accepted is 0"},
      {"[{k: 2, position: [0, 0, 1/2], moment: [1, 0, 0]}]",
       "6:19: error: k '2' is out of range; accepted is an integer from 1 to 1"},
      {"[{position: [0, 0, 1/2], moment: [1, 0, 0]}, {position: [1, 0, -1/2], moment: [1, 0, 0]}]",
       "6:59: error: the atom at (1, 0, -1/2) is listed already, on line 6; accepted is one entry "
       "for "
       "each atom of a primitive cell"},
      {"[{position: [0, 0, 1/2]}]", "6:15: error: an arrangement entry needs the key 'moment'"},
  };
  for (const auto& [text, message] : cases)
    EXPECT_EQ(job_fault(job_text(5, before + text)), std::string("job.yaml:") + message) << text;
  EXPECT_EQ(job_fault(job_text(5, "arrangement: [{position: [0, 0, 1/2], moment: [1, 0, 0]}]")),
            "job.yaml:5:14: error: an arrangement needs 'propagation' with at least one vector");
}

TEST(JobErrorsTest, TablesInFiles) {
  const std::filesystem::path folder =
      std::filesystem::path(testing::TempDir()) / "spinsieve_table_errors";
  std::filesystem::create_directories(folder);
  const std::string csv = (folder / "lines.csv").string();
  const struct {
    const char* table;
    const char* message;
  } cases[] = {
      {"q,intensity\n1,2\n", ":1:1: error: the file has no column sigma with values in it"},
      {"intensity,sigma\n1,2\n",
       ":1:1: error: the file has no column q, d, two_theta or hkl with values in it"},
      {"q,sigma\n1,2\n",
       ":1:1: error: the file has no column intensity or above with values in it"},
      {"q,intensity,sigma\n1,2,3\n2,3,x\n",
       ":3:5: error: sigma 'x' is not a number; accepted is a decimal such as 2.41"},
      {"q,intensity,sigma\n1,2,3\n2,3,-1\n",
       ":3:5: error: sigma '-1' is out of range; accepted is a number above 0"},
      {"q,intensity,sigma\n1,2,3\n2,3,\n", ":3:1: error: a line needs the key 'sigma'"},
      {"q,intensity,sigma,h\n1,2,3,4\n",
       ":1:19: error: unknown column 'h'; the nearest known column is 'q'"},
  };
  for (const auto& [table, message] : cases) {
    std::ofstream(csv) << table;
    std::string text = job_text(6, "measurement: {lines: lines.csv}");
    std::string found = "no error";
    try {
      parse_job(text, (folder / "job.yaml").string());
    } catch (const Error& error) {
      found = error.what();
    }
    EXPECT_EQ(found, csv + message) << table;
  }
  EXPECT_EQ(
      job_fault(job_text(6, "measurement: {lines: no_such.csv}")),
      "job.yaml:6:22: error: 'no_such.csv' cannot be read: No such file or directory; accepted "
      "is a CSV file, its path relative to the job's folder");
  std::filesystem::remove_all(folder);
}

TEST(JobErrorsTest, AMissingJobIsNamed) {
  EXPECT_THAT([] { read_job("no_such_job.yaml"); },
              testing::ThrowsMessage<Error>(
                  "no_such_job.yaml: error: cannot be read: No such file or directory"));
}

}  // namespace
}  // namespace spinsieve

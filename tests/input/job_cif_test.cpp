#include <filesystem>
#include <fstream>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "input/job.hpp"

namespace spinsieve {
namespace {

using testing::HasSubstr;

/// A folder with one CIF of an invented perovskite, removed at the end.
class JobCifTest : public testing::Test {
 protected:
  JobCifTest() : folder_(std::filesystem::path(testing::TempDir()) / "spinsieve_job_cif") {
    std::filesystem::create_directories(folder_);
    std::ofstream(folder_ / "parent.cif")
        << "data_parent\n_cell_length_a 5.74\n_cell_length_b 7.69\n_cell_length_c 5.53\n"
           "_cell_angle_alpha 90\n_cell_angle_beta 90\n_cell_angle_gamma 90\n"
           "_space_group_name_H-M_alt 'P n m a'\n"
           "loop_\n_atom_site_label\n_atom_site_type_symbol\n_atom_site_fract_x\n"
           "_atom_site_fract_y\n_atom_site_fract_z\n_atom_site_occupancy\n_atom_site_B_iso_or_"
           "equiv\n"
           "M1 Mn3+ 0 0 0.5 1 0.3\nA1 La3+ 0.549 0.25 0.01 0.7 0.5\nA2 Sr2+ 0.549 0.25 0.01 0.3 "
           "0.5\nO1 O2- 0.99 0.25004 0.07 1 0.6\nX1 D 0.2 0.1 0.3 0 0\n";
  }
  JobCifTest(const JobCifTest&) = delete;
  JobCifTest& operator=(const JobCifTest&) = delete;
  JobCifTest(JobCifTest&&) = delete;
  JobCifTest& operator=(JobCifTest&&) = delete;
  ~JobCifTest() override { std::filesystem::remove_all(folder_); }

  Job read(const std::string& sites) const {
    return parse_job("spinsieve: 1\ncrystal: {cif: parent.cif}\n" + sites,
                     (folder_ / "job.yaml").string());
  }
  std::string fault(const std::string& sites) const {
    try {
      read(sites);
    } catch (const Error& error) {
      std::string text = error.what();
      const std::string before = folder_.string() + "/";
      for (std::size_t at = text.find(before); at != std::string::npos; at = text.find(before))
        text.erase(at, before.size());
      return text;
    }
    return "no error";
  }

  std::filesystem::path folder_;
};

TEST_F(JobCifTest, CrystalAndSitesComeFromTheCif) {
  const Job job = read("magnetic_sites: [{label: M1, ion: Mn3+, moment_limit: 4}]\n");
  EXPECT_EQ(job.group.hall_number(), 292);
  EXPECT_TRUE(job.cell_given);
  EXPECT_EQ(job.cell.b(), 7.69);
  ASSERT_EQ(job.magnetic_sites.size(), 1U);
  EXPECT_EQ(to_string(job.magnetic_sites[0].site.position), "0, 0, 1/2");
  EXPECT_EQ(job.magnetic_sites[0].displacement.b_iso, 0.3);
  EXPECT_EQ(job.magnetic_sites[0].site.place.line(), 3) << "messages point into the job";
  ASSERT_EQ(job.other_sites.size(), 3U) << "M1 is magnetic, X1 is empty";
  EXPECT_EQ(job.other_sites[0].site.label, "A1");
  EXPECT_EQ(job.other_sites[0].element, "La");
  EXPECT_EQ(job.other_sites[0].occupancy, 0.7);
  EXPECT_EQ(job.other_sites[1].element, "Sr");
  EXPECT_EQ(job.other_sites[2].element, "O");
  EXPECT_EQ(job.other_sites[2].displacement.b_iso, 0.6);
  EXPECT_EQ(to_string(job.other_sites[2].site.position), "99/100, 1/4, 7/100");
  ASSERT_EQ(job.notes.size(), 4U) << "the setting and how the CIF gives it come first";
  EXPECT_EQ(to_string(job.notes[2]).substr(folder_.string().size()),
            "/parent.cif:20:1: site O1 was moved from (99/100, 6251/25000, 7/100) to the special "
            "position (99/100, 1/4, 7/100)");
  EXPECT_EQ(job.notes[3].text, "atom X1 has occupancy 0 and is left out");
}

TEST_F(JobCifTest, TheJobHasTheLastWord) {
  const Job job = read(
      "magnetic_sites: [{label: M1, ion: Mn3+, position: [1/2, 0, 0], b_iso: 0.1, occupancy: "
      "0.9}]\n"
      "other_sites: [{label: O1, element: O, b_iso: 1}]\n");
  EXPECT_EQ(to_string(job.magnetic_sites[0].site.position), "1/2, 0, 0") << "of the same orbit";
  EXPECT_EQ(job.magnetic_sites[0].displacement.b_iso, 0.1);
  EXPECT_EQ(job.magnetic_sites[0].occupancy, 0.9);
  ASSERT_EQ(job.other_sites.size(), 3U);
  EXPECT_EQ(job.other_sites[0].site.label, "O1");
  EXPECT_EQ(job.other_sites[0].displacement.b_iso, 1);
}

TEST_F(JobCifTest, ContradictionsAreErrors) {
  EXPECT_EQ(fault("magnetic_sites: [{label: M2, ion: Mn3+}]\n"),
            "job.yaml:3:26: error: the CIF has no atom 'M2'; accepted is one of its labels, or the "
            "key 'position'");
  EXPECT_EQ(fault("magnetic_sites: [{label: M1, ion: Fe3+}]\n"),
            "job.yaml:3:35: error: ion Fe3+, but the CIF has Mn3+ at M1; accepted is an ion of the "
            "same element");
  EXPECT_EQ(fault("magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 1/4, 0]}]\n"),
            "job.yaml:3:51: error: the CIF has M1 at (0, 0, 1/2), which is not equivalent to (0, "
            "1/4, 0); leave the position out or take another label");
  EXPECT_EQ(fault("magnetic_sites: [{label: T1, ion: Mn3+, position: [1/2, 0, 0]}]\n"),
            "parent.cif:17:1: error: sites T1 and M1 stand on the same spot; accepted are sites "
            "apart, or occupancies that sum to at most 1");
}

TEST_F(JobCifTest, MissingOrDoubleCrystalsAreNamed) {
  const auto with_crystal = [this](const std::string& crystal) {
    try {
      parse_job("spinsieve: 1\ncrystal: " + crystal + "\n", (folder_ / "job.yaml").string());
    } catch (const Error& error) {
      return error.message();
    }
    return std::string("no error");
  };
  EXPECT_EQ(with_crystal("{cif: parent.cif, space_group: 62}"),
            "'space_group' beside 'cif' in crystal; accepted is either a CIF or space_group and "
            "cell");
  EXPECT_THAT(
      with_crystal("{cif: absent.cif}"),
      testing::AllOf(testing::StartsWith("'absent.cif' "),
                     HasSubstr("accepted is a CIF, its path relative to the job's folder")));
}

}  // namespace
}  // namespace spinsieve

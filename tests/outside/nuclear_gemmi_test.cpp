// Nuclear structure factors against the general-purpose library gemmi, which expands and sums on
// its own; its table of lengths is replaced by ours, so that only the sums are compared.
#include <gemmi/neutron92.hpp>
#include <gemmi/sfcalc.hpp>
#include <gemmi/small.hpp>
#include <gemmi/symmetry.hpp>
#include <gtest/gtest.h>

#include "scattering/nuclear.hpp"
#include "scattering/scattering_length.hpp"

namespace spinsieve {
namespace {

struct Atom {
  const char* element;
  FractionVector position;
  double occupancy;
  double b_iso;
  std::optional<std::array<double, 6>> u_ij;
};

struct Case {
  const char* symbol;
  Cell cell;
  std::vector<Atom> atoms;
};

TEST(NuclearOutside, SumsAgreeWithGemmi) {
  const Fraction half(1, 2);
  const Fraction quarter(1, 4);
  const std::vector<Case> cases = {
      {"P n m a",
       Cell(5.6, 7.6, 5.3, 90, 90, 90),
       {{"La", {Fraction(3, 50), quarter, Fraction(1, 50)}, 0.9, 0.3, {}},
        {"Fe", {0, 0, half}, 1, 0, std::array{0.01, 0.02, 0.008, 0.003, -0.002, 0.004}},
        {"O", {Fraction(49, 100), quarter, Fraction(7, 100)}, 1, 0.5, {}},
        {"O",
         {Fraction(29, 100), Fraction(1, 25), Fraction(71, 100)},
         1,
         0,
         std::array{0.011, 0.007, 0.013, 0.002, 0.001, -0.003}}}},
      {"R -3 c",
       Cell(5, 5, 13.7, 90, 90, 120),
       {{"Cr", {0, 0, Fraction(7, 20)}, 1, 0.2, {}},
        {"O", {Fraction(31, 100), 0, quarter}, 1, 0.4, {}}}},
      {"F d -3 m :2",
       Cell(10.1, 10.1, 10.1, 90, 90, 90),
       {{"Mn", {half, half, half}, 1, 0.1, {}},
        {"O", {Fraction(33, 100), Fraction(1, 8), Fraction(1, 8)}, 0.95, 0.6, {}}}},
      {"P 63 c m",
       Cell(6.1, 6.1, 11.4, 90, 90, 120),
       {{"Mn", {Fraction(333, 1000), 0, 0}, 1, 0.1, {}},
        {"Y", {0, 0, Fraction(27, 100)}, 1, 0.6, {}}}},
      {"C 1 2/m 1",
       Cell(9, 8.5, 5, 90, 105, 90),
       {{"Ni",
         {Fraction(1, 10), 0, Fraction(3, 10)},
         1,
         0,
         std::array{0.01, 0.02, 0.008, 0.0, -0.002, 0.0}}}},
  };
  for (const Case& c : cases) {
    SCOPED_TRACE(c.symbol);
    const SpaceGroup group = parse_space_group(c.symbol);
    gemmi::SmallStructure small;
    small.cell.set(c.cell.a(), c.cell.b(), c.cell.c(), c.cell.alpha(), c.cell.beta(),
                   c.cell.gamma());
    const gemmi::SpaceGroup* outside = gemmi::find_spacegroup_by_number(group.number());
    ASSERT_NE(outside, nullptr);
    if (group.number() == 227) outside = gemmi::find_spacegroup_by_name("F d -3 m:2");
    small.spacegroup_hm = outside->xhm();
    small.cell.set_cell_images_from_spacegroup(outside);
    const double order = static_cast<double>(group.order() * group.centrings().size());
    std::vector<NuclearSite> sites;
    for (const Atom& atom : c.atoms) {
      NuclearSite& site = sites.emplace_back();
      site.site.label = atom.element;
      site.site.position = atom.position;
      site.element = atom.element;
      site.occupancy = atom.occupancy;
      site.displacement.b_iso = atom.b_iso;
      site.displacement.u_ij = atom.u_ij;
      gemmi::SmallStructure::Site other;
      other.label = atom.element;
      other.element = gemmi::Element(atom.element);
      const Vector3 r = to_double(atom.position);
      other.fract = gemmi::Fractional(r[0], r[1], r[2]);
      const double multiplicity = static_cast<double>(Orbit(group, atom.position).atoms().size() *
                                                      group.centrings().size());
      other.occ = atom.occupancy * multiplicity / order;  // divided by the site symmetry
      other.u_iso = atom.b_iso / (8 * std::numbers::pi * std::numbers::pi);
      if (atom.u_ij) {
        const auto& u = *atom.u_ij;
        other.aniso = {u[0], u[1], u[2], u[3], u[4], u[5]};
      }
      small.sites.push_back(other);
      gemmi::Neutron92<double>::get_(other.element.elem) =
          scattering_length(atom.element).length_fm;
    }
    const NuclearScatterers nuclei(c.cell, group, {}, sites);
    gemmi::StructureFactorCalculator<gemmi::Neutron92<double>> calculator(small.cell);
    double largest = 0;
    for (int h = -4; h <= 4; ++h)
      for (int k = -4; k <= 4; ++k)
        for (int l = -4; l <= 4; ++l) {
          if (!group.in_reciprocal_lattice({h, k, l}) || (h == 0 && k == 0 && l == 0)) continue;
          const std::complex<double> theirs =
              calculator.calculate_sf_from_small_structure(small, {{h, k, l}});
          const std::complex<double> ours = nuclei.structure_factor({h, k, l});
          largest = std::max(largest, std::abs(theirs));
          // Our lengths have an imaginary part b'' from absorption, below 0.1 fm a cell here; it
          // cancels to first order in the mean of a reflection and its opposite.
          EXPECT_LT(std::abs(ours - theirs), 0.1) << h << ' ' << k << ' ' << l;
          const double mean =
              std::sqrt((std::norm(ours) + std::norm(nuclei.structure_factor({-h, -k, -l}))) / 2);
          EXPECT_NEAR(mean, std::abs(theirs), 1e-5 * (10 + std::abs(theirs)))
              << h << ' ' << k << ' ' << l;
        }
    EXPECT_GT(largest, 10);
  }
}

}  // namespace
}  // namespace spinsieve

# Judges small irreps by GAP's own character tables.
#
# For each case of `cases` (written by export_irreps) the finite group G_k/ker is built from the
# augmented matrices alone, ker being the translations T with k·T an integer; its irreducible
# characters with D(T) = exp(-2 pi i k.T) are compared, as sets, with the given ones on all
# operations of the little group. The last line printed is the verdict: GAP exits 0 on errors.

# Of a vector in Q^3: n times k.T modulo n.
TurnOf := function(k, n, T)
  return (n * (k * T)) mod n;
end;

# The little group modulo ker as a permutation group on its own elements [i, m], meaning operation
# i after a translation with k.T = m/n; returned with the images of translations and operations.
QuotientGroup := function(case)
  local k, n, ops, count, turn, images, regular, step, moved;
  k := case.k;
  n := Lcm(List(case.lattice, T -> DenominatorRat(k * T)));
  ops := case.operations;
  count := Length(ops);
  # g * ops[i] = (translation by T) * ops[j]; the image of [i, m] is [j, m + k.T], as the little
  # group keeps k.T.
  regular := function(g)
    local images, i, m, product, j, T, shift;
    images := [];
    for i in [1 .. count] do
      product := g * ops[i];
      j := PositionProperty(ops, h -> ForAll([1 .. 3], r -> h[r]{[1 .. 3]} = product[r]{[1 .. 3]}));
      T := List([1 .. 3], r -> product[r][4] - ops[j][r][4]);
      shift := n * (k * T);
      if not IsInt(shift) then Error("an operation outside the group"); fi;
      for m in [0 .. n - 1] do
        images[(i - 1) * n + m + 1] := (j - 1) * n + ((m + shift) mod n) + 1;
      od;
    od;
    return PermList(images);
  end;
  moved := IdentityMat(4);
  step := First(Tuples([0 .. n - 1], 3), x -> (n * (k * (x * case.lattice))) mod n = 1 mod n);
  for count in [1 .. 3] do moved[count][4] := (step * case.lattice)[count]; od;
  count := Length(ops);
  images := List(ops, regular);
  return rec(n := n, translation := regular(moved), images := images,
             group := Group(Concatenation(images, [regular(moved)])));
end;

# Milliseconds spent on character tables alone, without building groups and comparing.
table_time := 0;

# The irreducible characters of G_k/ker that belong to k, on the operations.
OutsideCharacters := function(case)
  local quotient, to_pc, irreps, wanted, t, images, start;
  quotient := QuotientGroup(case);
  if Size(quotient.group) <> quotient.n * Length(case.operations) then
    Error("the quotient has a wrong order");
  fi;
  to_pc := IsomorphismPcGroup(quotient.group);
  images := List(quotient.images, g -> Image(to_pc, g));
  t := Image(to_pc, quotient.translation);
  start := Runtime();
  irreps := Irr(Image(to_pc));
  table_time := table_time + Runtime() - start;
  wanted := Filtered(irreps, chi -> t ^ chi = chi[1] * E(quotient.n) ^ -1);
  return Set(wanted, chi -> List(images, g -> g ^ chi));
end;

JudgeAll := function()
  local case, agreed, characters, start;
  agreed := 0;
  characters := 0;
  start := Runtime();
  for case in cases do
    if Set(case.irreps) <> OutsideCharacters(case) or not IsDuplicateFree(case.irreps) then
      Print("DIFFERENT: group ", case.it, " at k = ", case.k, "\n");
    else
      agreed := agreed + 1;
      characters := characters + Length(case.irreps);
    fi;
  od;
  Print("GAP spent ", table_time, " ms on ", Length(cases), " character tables, ",
        Runtime() - start, " ms with building and comparing\n");
  if agreed = Length(cases) and agreed > 0 then
    Print("VERDICT all ", agreed, " cases agree, ", characters, " irreps\n");
  else
    Print("VERDICT ", Length(cases) - agreed, " of ", Length(cases), " cases differ\n");
  fi;
end;

JudgeAll();

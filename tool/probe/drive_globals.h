// Globals that hold numbers and may change, as further inputs.
//
// `double epsilon = 1e-6;`, the attitude of a module: what a function computes
// with them is known only as a function of them. Each such global gets an
// object of its own that every machine makes first, at an address that is
// always the same, and each candidate a formal for it; those that it does not
// read count no more than other arguments that it does not read. A candidate
// that writes one is refused.
#pragma once

#include "probe/emit.h"
#include "probe/machine.h"

namespace dextral::probe {

// Moves the globals of the module out of it and adds the formals.
void expose_globals(Kit&);

// Makes their objects in a new machine. False: they do not come to lie where
// they should.
bool make_globals(Machine&, const Candidate&);

}  // namespace dextral::probe

// The words of evidence and repairs. Rules give the sentence of a finding;
// how a step of its chain and a repair are said is decided here, once for all
// formats.
#pragma once

#include <string>

#include "core/evidence.h"
#include "solve/solution.h"

namespace dextral::tell {

// "`C_bn` is declared `passive ned to body`"
std::string words(const Reason&);

// "write `C_bn.transpose()` for `C_bn`"; empty where there is none.
std::string words(const solve::Repair&);

// "drop inverse": the kind of a repair, for programs.
const char* name(solve::RepairKind);

}  // namespace dextral::tell

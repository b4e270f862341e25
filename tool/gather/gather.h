// Gather: one translation unit to facts.
//
// Parses the unit with Clang (bodies outside the scope skipped, pending
// instantiations left out) and walks the functions of the scope. Never throws;
// a unit that cannot be read says why in its facts.
#pragma once

#include "core/facts.h"
#include "project/project.h"

namespace dextral::gather {

Facts gather(const project::Unit&, const project::Project&, const std::vector<std::string>& rule_ids);

}  // namespace dextral::gather

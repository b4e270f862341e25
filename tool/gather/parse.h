// One translation unit through Clang: parsed as a prefix, bodies outside the
// scope skipped, fatal errors as errors.
#pragma once

#include <functional>

#include "core/facts.h"
#include "gather/clang.h"
#include "project/project.h"

namespace dextral::gather {

using Visit = std::function<void(clang::ASTContext&, clang::Sema&)>;

// Calls `visit` once the unit is parsed. Errors go into the facts; false: the
// unit could not be parsed at all.
bool parse(const project::Unit&, const project::Project&, Facts&, const Visit& visit);

}  // namespace dextral::gather

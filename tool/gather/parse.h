// One translation unit through Clang: parsed as a prefix, fatal errors as errors.
//
// Bodies outside the scope are skipped, or all bodies are at hand: those of
// templates are then parsed when something instantiates them.
#pragma once

#include <functional>
#include <vector>

#include "core/facts.h"
#include "gather/clang.h"
#include "project/project.h"

namespace dextral::gather {

using Visit = std::function<void(clang::ASTContext&, clang::Sema&)>;

enum class Bodies { of_scope, all };

// What `#if` leaves out.
using Inactive = std::vector<clang::SourceRange>;

// Calls `visit` once the unit is parsed. Errors go into the facts; false: the
// unit could not be parsed at all.
bool parse(const project::Unit&, const project::Project&, Facts&, const Visit& visit, Bodies = Bodies::of_scope,
           Inactive* = nullptr);

}  // namespace dextral::gather

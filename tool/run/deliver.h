// What a run leaves behind: the report, the ledger of known findings, and
// repairs written into the sources.
//
// Each function tells its own problems on standard error, with the remedy, and
// returns whether it went well.
#pragma once

#include <optional>
#include <set>
#include <string>
#include <vector>

#include "core/facts.h"
#include "project/project.h"
#include "run/commands.h"
#include "tell/report.h"

namespace dextral::run {

// The folder that paths are told relative to: the project's, or where we stand.
std::string told_root(const project::Project&);

// The ledger that was asked for; empty where none was. Nothing: it cannot be
// read. One that is to be written first need not exist.
std::optional<std::vector<tell::Known>> read_known(const Lint&);

// Takes the known findings out; with --update-known, after listing all of them.
// Nothing: the ledger cannot be written.
std::optional<tell::SetAside> settle(const Lint&, std::vector<Finding> sorted, std::vector<tell::Known> before,
                                     const FileTable&, const std::string& root, const std::set<FileId>& settled);

bool deliver(const Lint&, const std::string& report);

// With --write-repairs: writes those of certain findings into the scope.
bool write_repairs(const Lint&, const std::vector<Finding>&, const FileTable&, const project::Project&);

// With --dry-run: what --write-repairs would do, as a unified diff.
std::string repairs_as_diff(const std::vector<Finding>&, const FileTable&, const project::Project&);

}  // namespace dextral::run

// Workers that crash, hang and outgrow their memory on purpose.
#include "run/workers.h"

#include <gtest/gtest.h>
#include <signal.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cstdlib>
#include <cstring>
#include <memory>

#include "run/progress.h"

namespace dextral::run {
namespace {

std::vector<project::Unit> units(const std::vector<std::string>& files) {
  std::vector<project::Unit> list;
  for (const std::string& file : files) list.push_back({file, "/", {}});
  return list;
}

std::size_t recurse(std::size_t depth) {
  volatile char frame[1024];
  frame[0] = char(depth);
  return depth == 0 ? std::size_t(frame[0]) : recurse(depth - 1) + std::size_t(frame[0] != 0);
}

void use_memory() {
  for (std::vector<char*> blocks;;) {
    blocks.push_back(static_cast<char*>(std::malloc(1 << 20)));
    if (!blocks.back()) std::abort();
    std::memset(blocks.back(), 1, 1 << 20);
    if (blocks.size() % 64 == 0) usleep(10000);
  }
}

void use_new() {
  for (std::vector<std::unique_ptr<std::string>> blocks;;)
    blocks.push_back(std::make_unique<std::string>(std::size_t(1) << 34, 'x'));
}

// The name of a unit says what becomes of its worker.
Facts act(const project::Unit& unit) {
  if (unit.file == "segfault") raise(SIGSEGV);
  if (unit.file == "abort") std::abort();
  if (unit.file == "exit") _exit(3);
  if (unit.file == "hang")
    while (true) pause();
  if (unit.file == "memory") use_memory();
  if (unit.file == "new") use_new();
  if (unit.file == "deep") recurse(32 << 10);
  Facts facts;
  facts.unit = unit.file;
  facts.read = true;
  if (unit.file == "process") facts.functions = {Function{.key = std::to_string(getpid())}};
  if (unit.file == "large") facts.functions.assign(3, Function{.key = std::string(5 << 20, 'x')});
  return facts;
}

Limits limits(std::size_t workers) {
  Limits limits;
  limits.workers = workers;
  limits.seconds = 20;
  limits.progress = false;
  return limits;
}

std::vector<std::string> reasons(const std::vector<Facts>& results) {
  std::vector<std::string> list;
  for (const Facts& facts : results) list.push_back(facts.unit + (facts.read ? "" : ": " + facts.not_read_because));
  return list;
}

TEST(Workers, ResultsStandInTheOrderOfTheUnits) {
  std::vector<std::string> names;
  for (int i = 0; i < 40; ++i) names.push_back("u" + std::to_string(i));
  for (std::size_t workers : {1, 2, 7, 100}) EXPECT_EQ(reasons(read_all(units(names), act, limits(workers))), names);
}

TEST(Workers, ACrashCostsItsOwnUnitOnly) {
  const std::vector<std::string> expected{"a",
                                          "segfault: Clang crashed (signal 11)",
                                          "b",
                                          "abort: Clang crashed (signal 6)",
                                          "exit: Clang gave up (exit status 3)",
                                          "c"};
  for (std::size_t workers : {1, 2, 6})
    EXPECT_EQ(reasons(read_all(units({"a", "segfault", "b", "abort", "exit", "c"}), act, limits(workers))), expected);
}

TEST(Workers, AHangCostsItsOwnUnitOnly) {
  Limits brief = limits(2);
  brief.seconds = 0.5;
  EXPECT_EQ(reasons(read_all(units({"hang", "a", "b", "hang", "c"}), act, brief)),
            (std::vector<std::string>{"hang: it took longer than 0.5 s; --time-limit raises the limit", "a", "b",
                                      "hang: it took longer than 0.5 s; --time-limit raises the limit", "c"}));
}

TEST(Workers, HungerForMemoryCostsItsOwnUnitOnly) {
  Limits small = limits(1);
  small.megabytes = 256;
  const std::string why = ": it needs more than 256 MB; --memory-limit raises the limit";
  EXPECT_EQ(reasons(read_all(units({"a", "memory", "b", "new", "c"}), act, small)),
            (std::vector<std::string>{"a", "memory" + why, "b", "new" + why, "c"}));
}

TEST(Workers, LargeAnswersArriveWhole) {
  std::vector<Facts> results = read_all(units({"large", "a", "large"}), act, limits(2));
  ASSERT_EQ(results[2].functions.size(), 3u);
  EXPECT_EQ(results[2].functions[2].key.size(), std::size_t(5) << 20);
}

TEST(Workers, DeepRecursionFindsItsStack) {
  EXPECT_EQ(reasons(read_all(units({"deep"}), act, limits(1))), (std::vector<std::string>{"deep"}));
}

TEST(Workers, OneWorkerIsAProcessOfItsOwnToo) {
  std::vector<Facts> results = read_all(units({"process", "process"}), act, limits(1));
  EXPECT_NE(results[0].functions.at(0).key, std::to_string(getpid()));
  EXPECT_EQ(results[0].functions.at(0).key, results[1].functions.at(0).key);
}

TEST(Workers, InProcessForDebuggers) {
  Limits debug = limits(4);
  debug.in_process = true;
  EXPECT_EQ(read_all(units({"process"}), act, debug)[0].functions.at(0).key, std::to_string(getpid()));
}

TEST(Workers, NoUnitsNoWorkers) { EXPECT_TRUE(read_all({}, act, limits(4)).empty()); }

TEST(Workers, LeaveNoProcessBehind) {
  read_all(units({"a", "segfault", "b"}), act, limits(3));
  EXPECT_EQ(waitpid(-1, nullptr, WNOHANG), -1);
}

TEST(Workers, TheDefaultIsAtLeastOne) { EXPECT_GE(default_workers(), 1u); }

TEST(Progress, TheLineFitsAndHidesControlCharacters) {
  EXPECT_EQ(progress_line(3, 20, "/p/nav.cpp", 78), "read 3 of 20: /p/nav.cpp");
  EXPECT_EQ(progress_line(3, 20, "/p/a\033[2Jb.cpp", 78), "read 3 of 20: /p/a?[2Jb.cpp");
  EXPECT_EQ(progress_line(3, 20, "/long/folder/nav.cpp", 25), "read 3 of 20: .../nav.cpp");
}

}  // namespace
}  // namespace dextral::run

// What was not read is told, with its reason.
#include "run/unread.h"

#include <gtest/gtest.h>

namespace dextral::run {
namespace {

Facts unit(bool read, const std::vector<Complaint>& complaints, const std::string& why = "") {
  Facts facts;
  facts.unit = "/p/nav.cpp";
  facts.read = read;
  facts.not_read_because = why;
  facts.files.add("/p/nav.cpp");
  facts.complaints = complaints;
  return facts;
}

Complaint complaint(ComplaintKind kind, std::uint32_t line, const std::string& message) {
  return {kind, {FileId(0), {line, 2}, {line, 5}}, "", message, ""};
}

TEST(Unread, NothingWhereAllWasRead) {
  EXPECT_TRUE(unread({unit(true, {}), unit(true, {complaint(ComplaintKind::unknown_frame, 1, "bodi")})}).empty());
}

TEST(Unread, ALostUnitSaysWhy) {
  auto list = unread({unit(false, {}, "Clang crashed (signal 11)")});
  ASSERT_EQ(list.size(), 1u);
  EXPECT_EQ(text(list[0]), "/p/nav.cpp: not read: Clang crashed (signal 11)");
}

TEST(Unread, AMissingHeaderIsToldBeforeWhatFollowsFromIt) {
  auto list = unread({unit(true, {complaint(ComplaintKind::compile_error, 9, "no type `Gains`"),
                                  complaint(ComplaintKind::missing_header, 3, "gains.h is missing")})});
  ASSERT_EQ(list.size(), 1u);
  EXPECT_EQ(text(list[0]), "/p/nav.cpp: read in part: /p/nav.cpp:3:2: gains.h is missing (and 1 more)");
}

}  // namespace
}  // namespace dextral::run

// Flags of other compilers, made fit for Clang.
#include "project/flags.h"

#include "support.h"

namespace dextral::project {
namespace {

namespace fs = std::filesystem;

Lines clean(const std::string& command, const std::string& directory = "/b") {
  std::vector<std::string> missing;
  return clean_flags(split_command(command), directory, missing);
}

TEST(Flags, CommandsAreSplitLikeAShellDoes) {
  EXPECT_EQ(split_command("g++  -DA=\"x y\" '-DB=\"q\"' a\\ b \"c\\d\" -DE=\\\"s\\\" \"\""),
            (Lines{"g++", "-DA=x y", "-DB=\"q\"", "a b", "c\\d", "-DE=\"s\"", ""}));
  EXPECT_EQ(split_command("a \\\n b\tc\n"), (Lines{"a", "b", "c"}));
  EXPECT_EQ(split_command(""), Lines{});
  EXPECT_EQ(split_command("\"open"), Lines{"open"});
}

TEST(Flags, WhatGivesTheMeaningIsKept) {
  EXPECT_EQ(clean("g++ -Iinc -I ../x -isystem /s -isystem../t -iquote q -DA -D B=1 -UC -U D -std=c++17 -m32 -fno-rtti "
                  "-o a.o -c a.cpp"),
            (Lines{"-I/b/inc", "-I/x", "-isystem", "/s", "-isystem", "/t", "-iquote", "/b/q", "-DA", "-DB=1", "-UC",
                   "-UD", "-std=c++17", "-m32", "-fno-rtti"}));
}

TEST(Flags, WhatDoesNotIsDropped) {
  EXPECT_EQ(
      clean(
          "gcc -O2 -g -Wall -Werror=format -MD -MF a.d -MT a.o -MQ q -MP -pthread -march=native -mcpu=cortex-m4 "
          "-mthumb "
          "-mfloat-abi=hard -fopenmp -fPIC -flto=auto -fno-tree-vectorize -specs=nano.specs -specs other.specs -pipe "
          "-Wl,-Iz -L /l -lm -u _x -T link.ld -Xlinker -Iy --param max-inline=3 -E -S -save-temps a.c -nodefaultlibs"),
      Lines{});
}

TEST(Flags, SysrootsAndTargetsOfCrossCompilers) {
  EXPECT_EQ(clean("arm-linux-g++ --sysroot=../sys -isystem =/usr/include/x --target=armv7-linux -c a.cpp"),
            (Lines{"--sysroot=/sys", "-isystem", "=/usr/include/x", "--target=armv7-linux"}));
  EXPECT_EQ(clean("g++ --sysroot s -isysroot i -target arm-none-eabi --gcc-toolchain=gt"),
            (Lines{"--sysroot=/b/s", "-isysroot", "/b/i", "-target", "arm-none-eabi", "--gcc-toolchain=/b/gt"}));
}

TEST(Flags, CudaCompilers) {
  EXPECT_EQ(clean("nvcc -forward-unknown-to-host-compiler -ccbin g++ -gencode arch=compute_70,code=sm_70 "
                  "--expt-relaxed-constexpr "
                  "-Xcompiler -Ino -Xcompiler=-fPIC --compiler-options -Dno -isystem=/cuda/include -x cu -I/k a.cpp"),
            (Lines{"-isystem", "=/cuda/include", "-I/k"}));
}

TEST(Flags, StandardsThatClangDoesNotKnow) {
  EXPECT_EQ(clean("g++ -std=c++2a -std=gnu++29 --std=c++11"), (Lines{"-std=c++2a", "-std=c++11"}));
}

TEST(Flags, FlagsWithoutTheirValue) {
  for (const char* flag : {"-I", "-D", "-isystem", "-include", "-o", "-x", "-Xlinker", "--sysroot=", "-std="})
    EXPECT_EQ(clean(flag), Lines{}) << flag;
}

TEST(Flags, PreprocessorWordsAreOpened) {
  EXPECT_EQ(clean("gcc -Wp,-DA=1,-I/x,-MD,a.d -Xclang -DB"), (Lines{"-DA=1", "-I/x", "-DB"}));
}

TEST(Flags, ForcedIncludes) {
  Folder folder;
  folder.put("config.h", "");
  folder.put("inc/other.h", "");
  EXPECT_EQ(clean("g++ -include config.h -include gone.h -include other.h -Iinc -imacros gone2.h", folder.path()),
            (Lines{"-include", folder / "config.h", "-include", "other.h", "-I" + (folder / "inc")}));
  // As CMake writes precompiled headers: the header stays where it is there.
  EXPECT_EQ(clean("clang++ -Xclang -include-pch -Xclang p.pch -Xclang -include -Xclang config.h -Winvalid-pch",
                  folder.path()),
            (Lines{"-include", folder / "config.h"}));
  EXPECT_EQ(clean("clang++ -Xclang -include -Xclang cmake_pch.hxx -DA", folder.path()), Lines{"-DA"});
}

TEST(Flags, ResponseFiles) {
  Folder folder;
  folder.put("outer.rsp", "-Iinc @inner.rsp\n\"-DA=x y\"");
  folder.put("inner.rsp", "-DB");
  folder.put("loop.rsp", "-DL @loop.rsp");
  EXPECT_EQ(clean("g++ @outer.rsp -DC", folder.path()), (Lines{"-I" + (folder / "inc"), "-DB", "-DA=x y", "-DC"}));
  EXPECT_LT(clean("g++ @loop.rsp", folder.path()).size(), 20u);
  std::vector<std::string> missing;
  clean_flags({"g++", "@gone.rsp"}, "/b", missing);
  EXPECT_EQ(missing, Lines{"/b/gone.rsp"});
}

TEST(Flags, TheCompilerBehindLaunchers) {
  auto name = [](const std::string& command) { return compiler_of(split_command(command)); };
  EXPECT_EQ(name("/usr/bin/ccache /usr/bin/g++-12 -c a.c"), "g++-12");
  EXPECT_EQ(name("env A=1 distcc gcc a.c"), "gcc");
  EXPECT_EQ(name("cmake -E __run_co_compile --launcher=ccache -- /usr/bin/clang++ -c a.c"), "clang++");
  EXPECT_EQ(name(""), "");
  EXPECT_EQ(clean("cmake -E __run_co_compile --tidy=x --source=a.c -- /usr/bin/cc -DA"), Lines{"-DA"});
}

TEST(Flags, TheLanguageIsSettled) {
  EXPECT_EQ(settle_language({"-std=c++17", "-DA"}, "a.c", Language::c), Lines{"-DA"});
  EXPECT_EQ(settle_language({"-std=c++17"}, "a.c", Language::cxx), (Lines{"-xc++", "-std=c++17"}));
  EXPECT_EQ(settle_language({"-xc", "-std=c99"}, "a.h", Language::cxx), Lines{"-xc++"});
  EXPECT_EQ(settle_language({"-std=c99"}, "a.h", Language::c), (Lines{"-xc", "-std=c99"}));
  EXPECT_EQ(settle_language({"-std=c++17"}, "a.cpp", Language::cxx), Lines{"-std=c++17"});
}

TEST(Flags, HeadersShowTheirLanguage) {
  for (const char* text : {"class A;", "  template <int N> struct S;", "namespace a {", "#include <vector>",
                           "# include <Eigen/Dense>", "std::string s;", "/* x */ class B;", "using A = int;"})
    EXPECT_TRUE(looks_like_cxx(text)) << text;
  for (const char* text :
       {"// class A;", "/* namespace\nclass B;\n*/ int x;", "#include <math.h>", "char* s = \"a::b\";",
        "struct classes;", "#ifdef __cplusplus\nextern \"C\" {\n#endif\nvoid f(void);", "int my_class;",
        "#include <sys/types.h>", ""})
    EXPECT_FALSE(looks_like_cxx(text)) << text;
}

TEST(Flags, HeadersThatDoNotShowItHaveTheirNeighbours) {
  Folder folder;
  std::string one = folder.put("c/a.h", "int f(void);"), other = folder.put("cxx/a.h", "int f();");
  folder.put("c/a.c", "");
  folder.put("cxx/a.cc", "");
  EXPECT_EQ(language_of(one), Language::c);
  EXPECT_EQ(language_of(other), Language::cxx);
  EXPECT_EQ(language_of(folder / "c/a.hpp"), Language::cxx);
  EXPECT_EQ(language_of(folder / "c/b.C"), Language::cxx);
}

TEST(Flags, DefaultsForAFileWithoutACommand) {
  Folder folder;
  std::string file = folder.put("pkg/src/deep/a.cpp", "");
  folder.put("pkg/include/a.h", "");
  folder.put("include/b.h", "");
  Lines want = {"-I" + (folder / "pkg/src/deep"), "-I" + folder.path(),
                "-I" + (folder / "pkg/src"),      "-I" + (folder / "pkg"),
                "-I" + (folder / "pkg/include"),  "-I" + (folder / "include")};
  if (fs::is_directory("/usr/include/eigen3")) want.push_back("-I/usr/include/eigen3");
  want.push_back("-std=gnu++20");
  EXPECT_EQ(default_flags(file, folder.path()), want);
  EXPECT_EQ(default_flags(folder.put("a.c", ""), folder.path()).back(), "-std=gnu17");
  EXPECT_EQ(default_flags(folder.put("c.h", ""), folder.path()).front(), "-xc");
}

}  // namespace
}  // namespace dextral::project

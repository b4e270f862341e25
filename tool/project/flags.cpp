#include "project/flags.h"

#include <algorithm>
#include <cctype>
#include <filesystem>
#include <optional>
#include <system_error>

#include "project/json_text.h"
#include "project/scope.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

enum class Value { path, file, text, language, standard };

// A flag that is kept with its value, joined to it or as the next word.
struct Valued {
  const char* flag;
  Value value;
  bool joined;  // also accepted joined
  bool apart;   // handed on as two words
};

// A flag whose name begins another's stands behind it.
constexpr Valued kValued[] = {
    {"-include-pch", Value::file, false, true},  // always dropped: see `put`
    {"-include", Value::file, true, true},
    {"-imacros", Value::file, true, true},
    {"-isystem-after", Value::path, true, true},
    {"-isystem", Value::path, true, true},
    {"-cxx-isystem", Value::path, true, true},
    {"-isysroot", Value::path, true, true},
    {"-iquote", Value::path, true, true},
    {"-idirafter", Value::path, true, true},
    {"-iframework", Value::path, true, true},
    {"--sysroot=", Value::path, true, false},
    {"--sysroot", Value::path, false, false},
    {"--gcc-toolchain=", Value::path, true, false},
    {"--gcc-install-dir=", Value::path, true, false},
    {"--target=", Value::text, true, false},
    {"-target", Value::text, false, true},
    {"-stdlib=", Value::text, true, false},
    {"--std=", Value::standard, true, false},
    {"-std=", Value::standard, true, false},
    {"-I", Value::path, true, false},
    {"-F", Value::path, true, false},
    {"-D", Value::text, true, false},
    {"-U", Value::text, true, false},
    {"-x", Value::language, true, false},
};

// Flags kept as they are.
constexpr const char* kWhole[] = {"-m32",
                                  "-m64",
                                  "-mx32",
                                  "-ansi",
                                  "-trigraphs",
                                  "-undef",
                                  "-nostdinc",
                                  "-nostdinc++",
                                  "-nostdlibinc",
                                  "-ffreestanding",
                                  "-fhosted",
                                  "-fsigned-char",
                                  "-funsigned-char",
                                  "-fshort-enums",
                                  "-fno-short-enums",
                                  "-fshort-wchar",
                                  "-fno-exceptions",
                                  "-fexceptions",
                                  "-fno-rtti",
                                  "-frtti",
                                  "-fms-extensions",

                                  "-fno-char8_t",
                                  "-fchar8_t",
                                  "-fopenmp-simd",
                                  "-fno-operator-names",
                                  "-fblocks",
                                  "-fdeclspec"};

// Flags dropped together with the next word, which could look like a flag.
constexpr const char* kDroppedPairs[] = {"-o",
                                         "-MF",
                                         "-MT",
                                         "-MQ",
                                         "-MJ",
                                         "-arch",
                                         "-Xlinker",
                                         "-Xassembler",
                                         "-Xpreprocessor",
                                         "-Xcompiler",
                                         "-Xcudafe",
                                         "-Xptxas",
                                         "-Xarch_device",
                                         "-Xarch_host",
                                         "-ccbin",
                                         "--compiler-options",
                                         "-gencode",
                                         "--generate-code",
                                         "-L",
                                         "-l",
                                         "-u",
                                         "-T",
                                         "-z",
                                         "-e",
                                         "-B",
                                         "-mllvm",
                                         "-wrapper",
                                         "-aux-info",
                                         "--param",
                                         "-specs",
                                         "-iprefix",
                                         "-iwithprefix",
                                         "-iwithprefixbefore",
                                         "-dumpbase",
                                         "-dumpdir",
                                         "-serialize-diagnostics"};

constexpr const char* kLaunchers[] = {"ccache", "sccache", "distcc", "icecc", "buildcache", "env", "time", "nice"};

constexpr const char* kLanguages[] = {"c", "c++", "c-header", "c++-header"};

constexpr const char* kStandards[] = {"c89",          "c90",
                                      "c99",          "c9x",
                                      "c11",          "c1x",
                                      "c17",          "c18",
                                      "c23",          "c2x",
                                      "gnu89",        "gnu90",
                                      "gnu99",        "gnu9x",
                                      "gnu11",        "gnu1x",
                                      "gnu17",        "gnu18",
                                      "gnu23",        "gnu2x",
                                      "iso9899:1990", "iso9899:199409",
                                      "iso9899:1999", "iso9899:2011",
                                      "iso9899:2017", "iso9899:2018",
                                      "c++98",        "c++03",
                                      "c++0x",        "c++11",
                                      "c++1y",        "c++14",
                                      "c++1z",        "c++17",
                                      "c++2a",        "c++20",
                                      "c++2b",        "c++23",
                                      "c++2c",        "c++26",
                                      "gnu++98",      "gnu++03",
                                      "gnu++0x",      "gnu++11",
                                      "gnu++1y",      "gnu++14",
                                      "gnu++1z",      "gnu++17",
                                      "gnu++2a",      "gnu++20",
                                      "gnu++2b",      "gnu++23",
                                      "gnu++2c",      "gnu++26"};

constexpr int kMostNested = 8;
constexpr std::size_t kMostWords = 200000;

bool starts(const std::string& text, const std::string& prefix) { return text.compare(0, prefix.size(), prefix) == 0; }

template <typename List>
bool among(const List& list, const std::string& word) {
  return std::find(std::begin(list), std::end(list), word) != std::end(list);
}

bool has_ending(const std::string& path, std::initializer_list<const char*> endings) {
  return among(endings, fs::path(path).extension().string());
}

bool exists(const std::string& path) {
  std::error_code error;
  return fs::exists(path, error);
}

// The words with response files and words for inner programs opened.
class Expander {
 public:
  Expander(const std::string& directory, std::vector<std::string>& missing)
      : directory_(directory), missing_(missing) {}

  std::vector<std::string> run(const std::vector<std::string>& words) {
    add(words, 0);
    return std::move(out_);
  }

 private:
  void add(const std::vector<std::string>& words, int depth) {
    for (const std::string& word : words) {
      if (out_.size() > kMostWords) return;
      if (word == "-Xclang") continue;
      if (starts(word, "-Wp,"))
        preprocessor(word);
      else if (word.size() > 1 && word[0] == '@')
        response(normal(word.substr(1), directory_), depth);
      else
        out_.push_back(word);
    }
  }

  void preprocessor(const std::string& word) {
    for (std::size_t at = 4; at <= word.size();) {
      std::size_t end = std::min(word.find(',', at), word.size());
      out_.push_back(word.substr(at, end - at));
      at = end + 1;
    }
  }

  void response(const std::string& path, int depth) {
    std::string text;
    std::vector<Problem> problems;
    if (depth < kMostNested && read_file(path, text, problems))
      add(split_command(text), depth + 1);
    else
      missing_.push_back(path);
  }

  const std::string& directory_;
  std::vector<std::string>& missing_;
  std::vector<std::string> out_;
};

class Cleaner {
 public:
  Cleaner(const std::vector<std::string>& words, const std::string& directory) : words_(words), directory_(directory) {}

  std::vector<std::string> run() {
    for (; at_ < words_.size(); ++at_) {
      const std::string& word = words_[at_];
      if (among(kDroppedPairs, word))
        ++at_;
      else if (among(kWhole, word))
        kept_.push_back(word);
      else
        valued(word);
    }
    forced_includes();
    return std::move(kept_);
  }

 private:
  void valued(const std::string& word) {
    for (const Valued& known : kValued) {
      std::string flag = known.flag;
      if (!starts(word, flag)) continue;
      if (word != flag && !known.joined) continue;
      bool next = word == flag && flag.back() != '=';
      if (next && at_ + 1 >= words_.size()) return;
      return put(known, next ? words_[++at_] : word.substr(flag.size()));
    }
  }

  void put(const Valued& known, std::string value) {
    std::string flag = known.flag;
    if (value.empty() || flag == "-include-pch") return;
    if (known.value == Value::language && !among(kLanguages, value)) return;
    if (known.value == Value::standard && !among(kStandards, value)) return;
    // A path that begins with = lies below the sysroot.
    if (known.value == Value::path && value[0] != '=') value = normal(value, directory_);
    if (flag == "--sysroot") flag = "--sysroot=";
    if (flag == "--std=") flag = "-std=";
    if (known.value == Value::file) forced_.push_back(kept_.size());
    if (known.apart)
      kept_.insert(kept_.end(), {flag, value});
    else
      kept_.push_back(flag + value);
  }

  // -include FILE: found from the folder of the command, else through the
  // include paths; one that the build has not made yet is dropped.
  void forced_includes() {
    for (auto at = forced_.rbegin(); at != forced_.rend(); ++at) {
      std::string& file = kept_[*at + 1];
      if (std::string here = normal(file, directory_); exists(here))
        file = here;
      else if (!in_include_paths(file))
        kept_.erase(kept_.begin() + std::ptrdiff_t(*at), kept_.begin() + std::ptrdiff_t(*at) + 2);
    }
  }

  bool in_include_paths(const std::string& file) const {
    for (std::size_t i = 0; i < kept_.size(); ++i) {
      if (starts(kept_[i], "-I") && exists(normal(file, kept_[i].substr(2)))) return true;
      if ((kept_[i] == "-isystem" || kept_[i] == "-iquote") && exists(normal(file, kept_[i + 1]))) return true;
    }
    return false;
  }

  const std::vector<std::string>& words_;
  const std::string& directory_;
  std::size_t at_ = 0;
  std::vector<std::string> kept_;
  std::vector<std::size_t> forced_;  // places of -include and -imacros
};

// Comments and texts taken out.
std::string code_of(const std::string& text) {
  std::string code;
  for (std::size_t i = 0; i < text.size(); ++i) {
    if (text.compare(i, 2, "//") == 0) {
      i = std::min(text.find('\n', i), text.size()) - 1;
    } else if (text.compare(i, 2, "/*") == 0) {
      std::size_t end = text.find("*/", i + 2);
      if (end == std::string::npos) break;
      i = end + 1;
      code += ' ';
    } else if (text[i] == '"') {
      for (++i; i < text.size() && text[i] != '"' && text[i] != '\n'; ++i) i += text[i] == '\\';
      code += "\"\"";
      if (i < text.size() && text[i] == '\n') code += '\n';
    } else {
      code += text[i];
    }
  }
  return code;
}

// <vector> but not <math.h>.
bool is_cxx_include(const std::string& line) {
  std::size_t open = line.find('<'), close = line.find('>');
  if (line[0] != '#' || line.find("include") == std::string::npos || close == std::string::npos || open > close)
    return false;
  std::string name = line.substr(open + 1, close - open - 1);
  return name.find('.') == std::string::npos && (name.find('/') == std::string::npos || starts(name, "Eigen/"));
}

bool beside_cxx_only(const std::string& file) {
  std::error_code error;
  bool c = false, cxx = false;
  fs::directory_iterator at(fs::path(file).parent_path(), error), end;
  for (; !error && at != end; at.increment(error)) {
    std::string path = at->path().string();
    c = c || has_ending(path, {".c"});
    cxx = cxx || (is_source(path) && !has_ending(path, {".c"})) || (is_header(path) && !has_ending(path, {".h"}));
  }
  return cxx && !c;
}

bool is_standard_of(const std::string& flag, Language language) {
  bool cxx = flag.find("++") != std::string::npos;
  return cxx == (language == Language::cxx);
}

}  // namespace

bool is_source(const std::string& path) { return has_ending(path, {".c", ".cc", ".cp", ".cpp", ".cxx", ".c++", ".C"}); }

bool is_header(const std::string& path) {
  return has_ending(path, {".h", ".hh", ".hp", ".hpp", ".hxx", ".h++", ".H", ".inl", ".ipp", ".tpp", ".tcc", ".ixx"});
}

std::vector<std::string> split_command(const std::string& command) {
  std::vector<std::string> words;
  std::string word;
  bool open = false;
  char quote = 0;
  for (std::size_t i = 0; i < command.size(); ++i) {
    char c = command[i];
    char then = i + 1 < command.size() ? command[i + 1] : '\0';
    bool escapes =
        c == '\\' && then && (!quote || (quote == '"' && std::string("\\\"$`\n").find(then) != std::string::npos));
    if (escapes) {
      if (then != '\n') word += then;
      ++i;
      open = open || then != '\n';
    } else if (quote) {
      if (c == quote)
        quote = 0;
      else
        word += c;
    } else if (c == '"' || c == '\'') {
      quote = c;
      open = true;
    } else if (std::isspace(static_cast<unsigned char>(c))) {
      if (open) words.push_back(std::move(word));
      word.clear();
      open = false;
    } else {
      word += c;
      open = true;
    }
  }
  if (open) words.push_back(std::move(word));
  return words;
}

std::string compiler_of(const std::vector<std::string>& words) {
  // Build tools that wrap a command put it behind a lone --.
  auto wrapped = std::find(words.begin(), words.end(), "--");
  bool wraps = wrapped != words.end() && wrapped + 1 != words.end() && among(words, "__run_co_compile");
  for (auto at = wraps ? wrapped + 1 : words.begin(); at != words.end(); ++at) {
    std::string name = fs::path(*at).filename().string();
    if (name.empty() || (*at)[0] == '-' || at->find('=') != std::string::npos || among(kLaunchers, name)) continue;
    return name;
  }
  return "";
}

std::vector<std::string> clean_flags(const std::vector<std::string>& words, const std::string& directory,
                                     std::vector<std::string>& missing) {
  std::vector<std::string> opened = Expander(directory, missing).run(words);
  return Cleaner(opened, directory).run();
}

std::vector<std::string> settle_language(std::vector<std::string> flags, const std::string& file, Language language) {
  std::erase_if(flags, [&](const std::string& flag) {
    return starts(flag, "-x") || (starts(flag, "-std=") && !is_standard_of(flag, language)) ||
           (flag == "-ansi" && language == Language::cxx);
  });
  bool name_says = is_source(file) && has_ending(file, {".c"}) == (language == Language::c);
  if (!name_says) flags.insert(flags.begin(), language == Language::c ? "-xc" : "-xc++");
  return flags;
}

bool looks_like_cxx(const std::string& text) {
  std::string code = code_of(text);
  if (code.find("::") != std::string::npos) return true;
  for (std::size_t at = 0; at < code.size();) {
    std::size_t end = std::min(code.find('\n', at), code.size());
    std::string line = code.substr(at, end - at);
    at = end + 1;
    line.erase(0, std::min(line.find_first_not_of(" \t\r"), line.size()));
    if (line.empty()) continue;
    std::string word =
        line.substr(0, std::size_t(std::find_if(line.begin(), line.end(),
                                                [](unsigned char c) { return !std::isalnum(c) && c != '_'; }) -
                                   line.begin()));
    if (word == "class" || word == "template" || word == "namespace" || word == "using" || is_cxx_include(line))
      return true;
  }
  return false;
}

Language language_of(const std::string& file) {
  if (has_ending(file, {".c"})) return Language::c;
  if (!has_ending(file, {".h"})) return Language::cxx;
  std::string text;
  std::vector<Problem> problems;
  if (read_file(file, text, problems) && looks_like_cxx(text)) return Language::cxx;
  return beside_cxx_only(file) ? Language::cxx : Language::c;
}

std::vector<std::string> default_flags(const std::string& file, const std::string& root) {
  std::vector<std::string> folders;
  auto add = [&](const std::string& folder) {
    std::error_code error;
    if (fs::is_directory(folder, error) && !among(folders, folder)) folders.push_back(folder);
  };
  std::string own = fs::path(file).parent_path().string();
  add(own);
  add(root);
  for (std::string folder = own; is_below(folder, root); folder = fs::path(folder).parent_path().string()) {
    add(folder);
    add(normal("include", folder));
    add(normal("src", folder));
    if (folder == root || folder == "/") break;
  }
  add(normal("include", root));
  add(normal("src", root));
  add("/usr/include/eigen3");
  std::vector<std::string> flags;
  for (const std::string& folder : folders) flags.push_back("-I" + folder);
  Language language = language_of(file);
  flags.push_back(language == Language::c ? "-std=gnu17" : "-std=gnu++20");
  return settle_language(std::move(flags), file, language);
}

}  // namespace dextral::project

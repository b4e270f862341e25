#include "project/flags.h"

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "project/json_text.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

bool starts(const std::string& text, const std::string& prefix) { return text.compare(0, prefix.size(), prefix) == 0; }

bool ends_with(const std::string& path, std::initializer_list<const char*> endings) {
  std::string extension = fs::path(path).extension().string();
  return std::any_of(endings.begin(), endings.end(), [&](const char* e) { return extension == e; });
}

// Flags kept with their value, joined or as the next word.
const std::vector<std::string> kPaths = {"-I", "-isystem", "-iquote", "-idirafter", "-include", "-imacros", "--sysroot=", "-isysroot", "-iframework"};
const std::vector<std::string> kValues = {"-D", "-U", "-x", "-target", "--target="};
const std::vector<std::string> kWhole = {"-nostdinc", "-nostdinc++", "-fsigned-char", "-funsigned-char", "-fno-exceptions", "-fno-rtti", "-fms-extensions",
                                         "-fshort-enums", "-ansi", "-m32", "-m64", "-fopenmp-simd", "-fpermissive", "-ffreestanding"};
// Flags that are dropped together with the next word.
const std::vector<std::string> kDroppedPairs = {"-o", "-MF", "-MT", "-MQ", "-arch", "-Xlinker", "-Xassembler", "-Xpreprocessor", "-L", "-l", "-u", "-T", "-z", "-wrapper", "-aux-info", "--param"};

std::string absolute(const std::string& path, const std::string& directory) {
  return fs::path(path).is_absolute() ? path : (fs::path(directory) / path).lexically_normal().string();
}

std::vector<std::string> expanded(const std::vector<std::string>& words, const std::string& directory, int depth = 0) {
  std::vector<std::string> out;
  for (const std::string& word : words) {
    if (word.size() < 2 || word[0] != '@' || depth > 4) {
      out.push_back(word);
      continue;
    }
    std::ifstream in(absolute(word.substr(1), directory));
    std::stringstream text;
    text << in.rdbuf();
    for (std::string& inner : expanded(split_command(text.str()), directory, depth + 1)) out.push_back(std::move(inner));
  }
  return out;
}

}  // namespace

bool is_source(const std::string& path) { return ends_with(path, {".c", ".cc", ".cpp", ".cxx", ".c++", ".C"}); }
bool is_header(const std::string& path) { return ends_with(path, {".h", ".hh", ".hpp", ".hxx", ".h++", ".inl", ".ipp", ".tpp"}); }

std::vector<std::string> split_command(const std::string& command) {
  std::vector<std::string> words;
  std::string word;
  bool open = false;
  char quote = 0;
  for (std::size_t i = 0; i < command.size(); ++i) {
    char c = command[i];
    if (c == '\\' && quote != '\'' && i + 1 < command.size()) {
      word += command[++i];
      open = true;
    } else if (quote) {
      if (c == quote) quote = 0;
      else word += c;
    } else if (c == '"' || c == '\'') {
      quote = c;
      open = true;
    } else if (std::isspace(static_cast<unsigned char>(c))) {
      if (open) words.push_back(word);
      word.clear();
      open = false;
    } else {
      word += c;
      open = true;
    }
  }
  if (open) words.push_back(word);
  return words;
}

std::vector<std::string> clean_flags(const std::vector<std::string>& given, const std::string& directory) {
  std::vector<std::string> words = expanded(given, directory), kept;
  for (std::size_t i = 0; i < words.size(); ++i) {
    const std::string& word = words[i];
    auto valued = [&](const std::vector<std::string>& list, bool path) {
      for (const std::string& flag : list) {
        if (!starts(word, flag)) continue;
        bool next = word == flag && flag.back() != '=';
        if (next && i + 1 >= words.size()) return true;
        std::string value = next ? words[++i] : word.substr(flag.size());
        if (path) value = absolute(value, directory);
        std::error_code error;
        if ((flag == "-include" || flag == "-imacros") && !fs::exists(value, error)) return true;
        if (flag.back() == '=') kept.push_back(flag + value);
        else if (flag.size() == 2) kept.push_back(flag + value);
        else kept.push_back(flag), kept.push_back(value);
        return true;
      }
      return false;
    };
    if (std::find(kDroppedPairs.begin(), kDroppedPairs.end(), word) != kDroppedPairs.end()) {
      ++i;
      continue;
    }
    if (starts(word, "-include-pch") || starts(word, "-Winvalid-pch")) {
      i += word == "-include-pch";
      continue;
    }
    if (valued(kPaths, true) || valued(kValues, false)) continue;
    if (starts(word, "-std=") || std::find(kWhole.begin(), kWhole.end(), word) != kWhole.end()) kept.push_back(word);
  }
  return kept;
}

std::vector<std::string> default_flags(const std::string& file, const std::string& root) {
  std::vector<std::string> flags;
  bool c = ends_with(file, {".c"});
  if (is_header(file)) {
    std::ifstream in(file);
    std::stringstream text;
    text << in.rdbuf();
    std::string content = text.str();
    c = ends_with(file, {".h"});
    for (const char* word : {"class ", "template", "namespace ", "std::", "#include <vector>", "Eigen"})
      if (content.find(word) != std::string::npos) c = false;
  }
  flags.push_back(c ? "-xc" : "-xc++");
  flags.push_back(c ? "-std=gnu17" : "-std=gnu++20");
  std::error_code error;
  for (const std::string& folder : {fs::path(file).parent_path().string(), root, root + "/include", root + "/src", std::string("/usr/include/eigen3")})
    if (fs::is_directory(folder, error)) flags.push_back("-I" + folder);
  return flags;
}

std::vector<Unit> read_compile_commands(const std::string& path, std::vector<Problem>& problems, std::vector<std::string>& notes) {
  std::vector<Unit> units;
  std::string text;
  if (!read_file(path, text, problems)) return units;
  std::size_t before = problems.size(), gone = 0;
  JsonNode root = read_json(path, text, problems);
  if (problems.size() != before) return units;
  if (root.kind != JsonNode::Kind::list) {
    problems.push_back({path, root.line, root.column, "a list of compile commands was expected", "write it anew with your build system"});
    return units;
  }
  for (const JsonNode& entry : root.items) {
    const JsonNode *file = entry.find("file"), *directory = entry.find("directory"), *command = entry.find("command"), *list = entry.find("arguments");
    if (!file || (!command && !list)) {
      problems.push_back({path, entry.line, entry.column, "an entry lacks \"file\", or \"command\" and \"arguments\"", "write the file anew"});
      continue;
    }
    Unit unit;
    unit.directory = directory ? absolute(directory->text, fs::path(path).parent_path().string()) : fs::path(path).parent_path().string();
    unit.file = fs::path(absolute(file->text, unit.directory)).lexically_normal().string();
    std::error_code error;
    if (!fs::exists(unit.file, error)) {
      ++gone;
      continue;
    }
    if (!is_source(unit.file)) continue;
    std::vector<std::string> words;
    if (list)
      for (const JsonNode& item : list->items) words.push_back(item.text);
    else words = split_command(command->text);
    std::string compiler;
    for (const std::string& word : words) {
      if (!word.empty() && word[0] == '-') break;
      compiler = word;
    }
    unit.arguments = clean_flags(words, unit.directory);
    bool cxx = compiler.find("++") != std::string::npos;
    bool said = std::any_of(unit.arguments.begin(), unit.arguments.end(), [](const std::string& a) { return starts(a, "-x"); });
    if (cxx && ends_with(unit.file, {".c"}) && !said) unit.arguments.insert(unit.arguments.begin(), "-xc++");
    units.push_back(std::move(unit));
  }
  if (gone) notes.push_back(std::to_string(gone) + " files of " + path + " do not exist");
  return units;
}

}  // namespace dextral::project

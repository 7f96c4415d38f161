// SPDX-License-Identifier: Apache-2.0
#include "tests/support/program.h"

#include <fcntl.h>
#include <spawn.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cerrno>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <sstream>

namespace sunder::support {

namespace {

[[noreturn]] void give_up(const std::string& what) {
  std::fprintf(stderr, "%s: %s\n", what.c_str(), std::strerror(errno));
  std::abort();
}

std::string read_file(const std::string& path) {
  std::ifstream in(path, std::ios::binary);
  std::ostringstream text;
  text << in.rdbuf();
  return text.str();
}

}  // namespace

Folder::Folder() {
  std::string form = (std::filesystem::temp_directory_path() / "sunder-test-XXXXXX").string();
  if (mkdtemp(form.data()) == nullptr) give_up("no temporary folder " + form);
  path_ = form;
}

Folder::~Folder() {
  std::error_code ignored;
  std::filesystem::remove_all(path_, ignored);
}

void Folder::write(const std::string& name, const std::string& bytes) const {
  std::ofstream out(file(name), std::ios::binary | std::ios::trunc);
  out.write(bytes.data(), static_cast<std::streamsize>(bytes.size()));
  out.close();
  if (!out) give_up("cannot write " + file(name));
}

std::string Folder::read(const std::string& name) const { return read_file(file(name)); }

bool Folder::has(const std::string& name) const { return std::filesystem::exists(file(name)); }

Outcome run_program(const std::vector<std::string>& command, const Folder& folder) {
  // Into files rather than pipes, so that no amount of output can block either side; into a folder
  // apart, so that the program finds nothing beside its own files.
  const Folder output;
  const std::string out_path = output.file("out");
  const std::string err_path = output.file("err");

  posix_spawn_file_actions_t actions;
  posix_spawn_file_actions_init(&actions);
  posix_spawn_file_actions_addopen(&actions, STDIN_FILENO, "/dev/null", O_RDONLY, 0);
  posix_spawn_file_actions_addopen(&actions, STDOUT_FILENO, out_path.c_str(), O_WRONLY | O_CREAT | O_TRUNC, 0600);
  posix_spawn_file_actions_addopen(&actions, STDERR_FILENO, err_path.c_str(), O_WRONLY | O_CREAT | O_TRUNC, 0600);
  posix_spawn_file_actions_addchdir_np(&actions, folder.path().c_str());

  std::vector<std::string> words = command;
  std::vector<char*> argv;
  argv.reserve(words.size() + 1);
  for (std::string& word : words) argv.push_back(word.data());
  argv.push_back(nullptr);

  Outcome outcome;
  pid_t child = 0;
  const int refused = posix_spawnp(&child, argv[0], &actions, nullptr, argv.data(), environ);
  posix_spawn_file_actions_destroy(&actions);
  if (refused != 0) {
    outcome.status = 127;
    outcome.err = command.front() + ": " + std::strerror(refused) + "\n";
    return outcome;
  }
  int status = 0;
  while (waitpid(child, &status, 0) < 0) {
    if (errno != EINTR) give_up("cannot wait for " + command.front());
  }
  outcome.status = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
  outcome.out = read_file(out_path);
  outcome.err = read_file(err_path);
  return outcome;
}

Outcome run_sunder(const std::vector<std::string>& arguments, const Folder& folder) {
  std::vector<std::string> command{SUNDER_PROGRAM};
  command.insert(command.end(), arguments.begin(), arguments.end());
  return run_program(command, folder);
}

}  // namespace sunder::support

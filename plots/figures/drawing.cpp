// SPDX-License-Identifier: Apache-2.0
#include "plots/figures/drawing.h"

#include <fmt/format.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <array>
#include <csignal>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <system_error>

// The library's header is not written for our warnings.
#pragma GCC diagnostic push
#pragma GCC diagnostic ignored "-Wconversion"
#pragma GCC diagnostic ignored "-Wsign-conversion"
#pragma GCC diagnostic ignored "-Wold-style-cast"
#pragma GCC diagnostic ignored "-Wshadow"
#pragma GCC diagnostic ignored "-Wdouble-promotion"
#pragma GCC diagnostic ignored "-Wnon-virtual-dtor"
#pragma GCC diagnostic ignored "-Wunused-result"
#pragma GCC diagnostic ignored "-Wdeprecated-declarations"
#include <gnuplot-iostream.h>
#pragma GCC diagnostic pop

#include "plots/text/files.h"

namespace sunder::plots {
namespace {

// gnuplot may end before it has read everything; the write must then fail, not end the program.
class IgnorePipeSignal {
 public:
  IgnorePipeSignal() noexcept {
    struct sigaction ignore {};
    ignore.sa_handler = SIG_IGN;
    ::sigaction(SIGPIPE, &ignore, &before_);
  }
  ~IgnorePipeSignal() { ::sigaction(SIGPIPE, &before_, nullptr); }
  IgnorePipeSignal(const IgnorePipeSignal&) = delete;
  IgnorePipeSignal& operator=(const IgnorePipeSignal&) = delete;

 private:
  struct sigaction before_ {};
};

struct Form {
  std::string_view ending;
  std::string_view terminal;
  std::string_view last;  ///< what a whole file of this form ends with
};

const std::array<Form, 3>& forms() {
  // The PNG has 1.5 pixels a canvas unit, the PDF (A4 across) 0.75 pt; both terminals draw a font of 1 pt
  // as 4/3 of that, the SVG as it stands.
  static const std::array<Form, 3> all = {{
      {".svg", "svg size 1120,792 font 'DejaVu Sans,12' background '#ffffff' noenhanced", "</svg>"},
      {".png",
       "pngcairo size 1680,1188 font 'DejaVu Sans,12' fontscale 1.125 linewidth 1.5 background '#ffffff' noenhanced",
       "IEND"},
      {".pdf",
       "pdfcairo size 11.69in,8.27in font 'DejaVu Sans,12' fontscale 0.5625 linewidth 1.2 background '#ffffff' "
       "noenhanced",
       "%%EOF"},
  }};
  return all;
}

bool whole(const std::string& path, std::string_view last) {
  std::ifstream file(path, std::ios::binary | std::ios::ate);
  if (!file) return false;
  const auto size = static_cast<std::streamoff>(file.tellg());
  constexpr std::streamoff kTail = 64;
  const std::streamoff n = std::min(size, kTail);
  file.seekg(-n, std::ios::end);
  std::string tail(static_cast<std::size_t>(n), '\0');
  file.read(tail.data(), n);
  return tail.find(last) != std::string::npos;
}

// @return the exit status of gnuplot, -1 where it could not be started.
int run_gnuplot(const std::string& script) {
  const IgnorePipeSignal quiet;
  // -d: no start-up file of the user may change the drawing. LC_ALL keeps numbers with a point.
  std::FILE* pipe = ::popen("LC_ALL=C.UTF-8 exec gnuplot -d >/dev/null 2>&1", "w");
  if (pipe == nullptr) return -1;
  // The stream closes what it is given; the pipe itself must stay open for pclose to tell the status.
  const int copy = ::dup(::fileno(pipe));
  std::FILE* handle = copy < 0 ? nullptr : ::fdopen(copy, "w");
  if (handle != nullptr) {
    try {
      gnuplotio::Gnuplot stream(handle);
      stream << script;
      stream.flush();
    } catch (const std::exception&) {  // a broken pipe; the exit status says why
    }
  } else if (copy >= 0) {
    ::close(copy);
  }
  const int status = ::pclose(pipe);
  return WIFEXITED(status) ? WEXITSTATUS(status) : -1;
}

}  // namespace

const Look& look(std::size_t index) noexcept {
  static const std::array<Look, 7> looks = {{
      {"#0072B2", "1", 4, 7},            // blue, solid, rising hatch
      {"#D55E00", "(12,4)", 5, 5},       // vermilion, long dashes, falling hatch
      {"#009E73", "(6,3)", 6, 9},        // bluish green, dashes, steep hatch
      {"#CC79A7", "(12,3,3,3)", 7, 11},  // reddish purple, dash and dot
      {"#000000", "1", 1, 4},            // black, cross hatch
      {"#E69F00", "(8,3)", 2, 13},       // orange, fine cross hatch
      {"#56B4E9", "(3,2)", 4, 6},        // sky blue, short dashes
  }};
  return looks[index % looks.size()];
}

std::string gnuplot_text(std::string_view text) {
  std::string out = "'";
  for (const char c : text) {
    if (c == '\'')
      out += "''";
    else if (static_cast<unsigned char>(c) < 0x20 || c == 0x7F)
      out += ' ';
    else
      out += c;
  }
  return out + "'";
}

std::string tick_text(std::string_view text) {
  std::string doubled;
  for (const char c : text) {
    if (c == '%') doubled += '%';
    doubled += c;
  }
  return gnuplot_text(doubled);
}

std::string number(double value) { return fmt::format("{:.9g}", value); }

std::string label_at(std::string_view text, double x, double y, const char* justify, double font, bool bold) {
  return fmt::format("set label {} at screen {}, screen {} {} noenhanced font '{},{}' textcolor rgb '#000000' front\n",
                     gnuplot_text(text), number(x / kSheetWidth), number(y / kSheetHeight), justify,
                     bold ? "DejaVu Sans Bold" : "", number(font));
}

std::string label_in(std::string_view text, const Rect& rect, double font, bool bold) {
  // gnuplot's own text boxes write the text twice into an SVG.
  return fmt::format(
             "set object rectangle from screen {}, screen {} to screen {}, screen {} front fillstyle solid 1 noborder "
             "fillcolor rgb '#ffffff'\n",
             number(rect.x / kSheetWidth), number(rect.y / kSheetHeight), number((rect.x + rect.w) / kSheetWidth),
             number((rect.y + rect.h) / kSheetHeight)) +
         label_at(text, rect.x + 2, rect.y + rect.h / 2, "left", font, bold);
}

std::string line_between(Spot a, Spot b, std::string_view style) {
  return fmt::format("set arrow from screen {}, screen {} to screen {}, screen {} nohead {}\n",
                     number(a.x / kSheetWidth), number(a.y / kSheetHeight), number(b.x / kSheetWidth),
                     number(b.y / kSheetHeight), style);
}

std::string leader_of(const PlacedLabel& label) {
  if (!label.leader) return "";
  const Rect& r = label.rect;
  const Spot end{std::clamp(label.anchor.x, r.x, r.x + r.w), std::clamp(label.anchor.y, r.y, r.y + r.h)};
  return line_between(label.anchor, end, "front lw 0.7 lc rgb '#000000'");
}

std::string area_at(const Rect& area) {
  return fmt::format(
      "set lmargin at screen {}\nset rmargin at screen {}\nset bmargin at screen {}\nset tmargin at screen {}\n",
      number(area.x / kSheetWidth), number((area.x + area.w) / kSheetWidth), number(area.y / kSheetHeight),
      number((area.y + area.h) / kSheetHeight));
}

std::optional<std::string> draw(const std::string& script, const std::string& path) {
  const std::string ending = std::filesystem::path(path).extension().string();
  const auto& all = forms();
  const auto form = std::find_if(all.begin(), all.end(), [&](const Form& f) { return f.ending == ending; });
  if (form == all.end()) {
    return "'" + path + "': the ending decides the form of a drawing; expected .svg, .png or .pdf" +
           (ending.empty() ? "" : ", got '" + ending + "'");
  }
  if (std::any_of(path.begin(), path.end(), [](char c) { return static_cast<unsigned char>(c) < 0x20; })) {
    return "the name of a drawing must not hold control characters";
  }
  PendingFile pending(path, ending);
  if (!pending.error().empty()) return pending.error();

  std::string whole_script =
      fmt::format("set encoding utf8\nset terminal {}\nset output {}\n", form->terminal, gnuplot_text(pending.path()));
  whole_script += script;
  whole_script += "unset output\n";
  const int status = run_gnuplot(whole_script);
  if (status == 127) return "gnuplot was not found; it draws the charts and must be installed";
  if (status != 0) return fmt::format("gnuplot could not draw '{}' (exit status {})", path, status);
  if (!whole(pending.path(), form->last)) return "the drawing '" + path + "' could not be written whole";
  return pending.commit(IfExists::replace);
}

}  // namespace sunder::plots

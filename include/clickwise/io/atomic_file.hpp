// Writing a file so that readers see the old one or the new one, never half of either.
#pragma once

#include <functional>
#include <string>
#include <string_view>

namespace clickwise::io {

// Writes the contents beside the file, brings them to the disk (fsync) and renames them over it.
// Makes missing folders. An existing file stays as it was if anything fails; nothing is left
// beside it. Throws core::JobError: no permission, disk full, the name is a folder.
void write_atomically(const std::string& path, std::string_view contents);

// The same where something else writes: `fill` is given the name of an empty file beside `path` and
// writes into it by that name. What it throws passes through.
void write_atomically(const std::string& path,
                      const std::function<void(const std::string& draft)>& fill);

}  // namespace clickwise::io

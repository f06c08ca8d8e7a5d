// Writing a file so that readers see the old one or the new one, never half of either.
#pragma once

#include <string>
#include <string_view>

namespace clickwise::io {

// Writes the contents beside the file, brings them to the disk (fsync) and renames them over it.
// Makes missing folders. An existing file stays as it was if anything fails; nothing is left
// beside it. Throws core::JobError: no permission, disk full, the name is a folder.
void write_atomically(const std::string& path, std::string_view contents);

}  // namespace clickwise::io

using System.IO.Enumeration;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Files;

/// <summary>The files that a name stands for: itself, or those of a folder, or those whose names a pattern fits, in the order of their names.</summary>
public static class RecordingNames
{
    /// <summary>Whether a name stands for several files: it ends as a folder does, or its last part is a pattern with <c>*</c> or <c>?</c>.</summary>
    public static bool IsSeveral(string path) => Path.EndsInDirectorySeparator(path) || IsPattern(path);

    /// <summary>
    /// The recordings that a name stands for. Of a folder, the files whose names tell a format; folders within it, and files whose names begin with a
    /// dot, are passed over. Names are compared byte by byte.
    /// </summary>
    /// <param name="options">The name, and the format of all files, or <see cref="RecordingFormat.ByName"/>.</param>
    /// <exception cref="InvalidRecordingException">There is none, or a name does not tell the format.</exception>
    public static IReadOnlyList<FileSourceOptions> Find(FileSourceOptions options)
    {
        string path = options.Path;
        if (path == RecordingFile.StandardInput || File.Exists(path)) return [Named(options, path)];
        bool isPattern = IsPattern(path);
        string folder = isPattern ? Path.GetDirectoryName(path) is { Length: > 0 } parent ? parent : "." : path;
        // A name without a file is left as it is: opening it says that it is not there.
        if (!isPattern && !Directory.Exists(folder) && !IsSeveral(path)) return [Named(options, path)];
        if (!Directory.Exists(folder)) throw new InvalidRecordingException($"The folder {folder} does not exist.");
        string pattern = isPattern ? Path.GetFileName(path) : "*";
        var files = Directory.EnumerateFiles(folder)
            .Where(file => !Path.GetFileName(file).StartsWith('.') && FileSystemName.MatchesSimpleExpression(pattern, Path.GetFileName(file), ignoreCase: false))
            .Where(file => isPattern || options.Format != RecordingFormat.ByName || RecordingFormats.OfName(file) is not null)
            .Order(StringComparer.Ordinal)
            .Select(file => Named(options, file))
            .ToList();
        if (files.Count == 0)
            throw new InvalidRecordingException(isPattern
                ? $"No file is there whose name fits {path}."
                : $"The folder {path} holds no recording (a file whose name ends in {RecordingFormats.KnownNames}).");
        return files;
    }

    private static bool IsPattern(string path) => Path.GetFileName(path).AsSpan().ContainsAny('*', '?');

    private static FileSourceOptions Named(FileSourceOptions options, string path) => options with
    {
        Path = path,
        Format = options.Format != RecordingFormat.ByName ? options.Format : RecordingFormats.OfName(path)
            ?? throw new InvalidRecordingException($"The name {path} does not tell the format of the recording ({RecordingFormats.KnownNames} would)."),
    };
}

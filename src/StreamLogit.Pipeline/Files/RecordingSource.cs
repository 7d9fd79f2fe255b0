using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Files;

/// <summary>Opens recordings, whatever their format.</summary>
public static class RecordingSource
{
    /// <summary>Opens all recordings that a name stands for, one after the other.</summary>
    /// <param name="options">The name, and how they are written.</param>
    /// <param name="maximumBytes">The longest record; a longer one becomes a reject.</param>
    /// <param name="time">By which to wait for more, where the last file is followed.</param>
    /// <exception cref="InvalidRecordingException">There is no such file, or it cannot be opened.</exception>
    public static IRecordSource OpenAll(FileSourceOptions options, int maximumBytes, TimeProvider time) =>
        RecordingNames.IsSeveral(options.Path)
            ? new RecordingSequence(RecordingNames.Find(options), maximumBytes, time)
            : Open(options, maximumBytes, time);

    /// <summary>Opens one recording.</summary>
    /// <param name="options">Which one, and how it is written.</param>
    /// <param name="maximumBytes">The longest record; a longer one becomes a reject.</param>
    /// <param name="time">By which to wait for more, where a file is followed.</param>
    /// <exception cref="InvalidRecordingException">There is no such file, or it cannot be opened.</exception>
    public static IRecordSource Open(FileSourceOptions options, int maximumBytes, TimeProvider time) =>
        options.Format == RecordingFormat.Parquet
            ? ParquetSource.Open(options.Path, maximumBytes)
            : FileSource.Open(options, maximumBytes, time);
}

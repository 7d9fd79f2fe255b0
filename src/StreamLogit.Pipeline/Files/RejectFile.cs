using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Formats;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Files;

/// <summary>Writes rejects to a file as JSON Lines. Its mark is the length of the file in bytes.</summary>
public sealed class RejectFile(FileOutputOptions options) : IScoreSink
{
    private readonly AppendFile _file = new(options.Path, "rejects");

    /// <inheritdoc/>
    public string Name => "rejects";

    /// <inheritdoc/>
    public void Start(long? mark) => _file.Start(mark);

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        foreach (int reject in records.Rejects)
        {
            RejectJson.Write(records, reject, _file.Buffer);
            _file.EndLine();
        }
        _file.Send();
    }

    /// <inheritdoc/>
    public long Flush() => _file.Flush();

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();
}

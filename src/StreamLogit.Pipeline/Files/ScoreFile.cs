using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Formats;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Files;

/// <summary>Writes scores to a file as JSON Lines. Its mark is the length of the file in bytes.</summary>
public sealed class ScoreFile(FileOutputOptions options, EngineDefinition definition) : IScoreSink
{
    private readonly AppendFile _file = new(options.Path, "scores");
    private readonly ScoreJson _json = new(definition);

    /// <inheritdoc/>
    public string Name => "scores";

    /// <inheritdoc/>
    public void Start(long? mark) => _file.Start(mark);

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        for (int i = 0; i < scores.Count; i++)
        {
            _json.Write(records, scores, i, _file.Buffer);
            _file.EndLine();
        }
        _file.Send();
    }

    /// <inheritdoc/>
    public long Flush() => _file.Flush();

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();
}

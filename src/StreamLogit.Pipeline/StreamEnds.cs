using System.Collections.Immutable;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline;

/// <summary>The two ends of a worker: where its records come from, and where scores, rejects and the recording go.</summary>
/// <param name="Source">Where records come from.</param>
/// <param name="Sinks">Where results go.</param>
/// <param name="Transaction">The transactions in which source and sinks are committed, or null where only the state's commits count.</param>
public sealed record StreamEnds(IRecordSource Source, ImmutableArray<IScoreSink> Sinks, IStreamTransaction? Transaction = null) : IDisposable
{
    /// <summary>Opens the ends of a definition that names files alone.</summary>
    /// <exception cref="PipelineException">They are out of reach.</exception>
    public static StreamEnds OfFiles(StreamDefinition definition, TimeProvider time) => new(OpenSource(definition, time), OpenSinks(definition));

    /// <summary>Opens the file that a definition names as its source.</summary>
    /// <exception cref="PipelineException">It is out of reach.</exception>
    public static IRecordSource OpenSource(StreamDefinition definition, TimeProvider time) => definition.Source switch
    {
        FileSourceOptions file => RecordingSource.OpenAll(file, definition.Engine.Record.MaximumBytes, time),
        null => throw new ArgumentException("The definition names no source.", nameof(definition)),
        var other => throw new ArgumentException($"{other.GetType().Name} is no file.", nameof(definition)),
    };

    /// <summary>The outputs of a definition that are files.</summary>
    public static ImmutableArray<IScoreSink> OpenSinks(StreamDefinition definition)
    {
        var sinks = ImmutableArray.CreateBuilder<IScoreSink>();
        if (definition.Scores is FileOutputOptions scores) sinks.Add(new ScoreFile(scores, definition.Engine));
        if (definition.Rejects is FileOutputOptions rejects) sinks.Add(new RejectFile(rejects));
        if (definition.Recording is { } recording) sinks.Add(new RecordingFolder(recording));
        return sinks.ToImmutable();
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        Source.Dispose();
        foreach (var sink in Sinks) sink.Dispose();
    }
}

using System.Collections.Immutable;
using StreamLogit.Engine;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline;

/// <summary>A worker's run over its stream: it begins where the last one committed, or at the beginning.</summary>
public sealed class StreamRun : IDisposable
{
    private readonly StreamEnds _ends;
    private readonly StateStore? _state;
    private readonly ScoringLoop _loop;

    /// <summary>Takes up the state, and brings engine, source and outputs to where it stands.</summary>
    /// <param name="definition">The stream.</param>
    /// <param name="ends">Where records come from and results go; the run disposes of them.</param>
    /// <param name="options">How records are moved.</param>
    /// <param name="time">The clock of commits, of waits and of health.</param>
    /// <exception cref="PipelineException">State, source and outputs do not fit together, or are out of reach.</exception>
    /// <exception cref="InvalidStateException">The state belongs to another definition.</exception>
    public StreamRun(StreamDefinition definition, StreamEnds ends, LoopOptions options, TimeProvider time)
    {
        _ends = ends;
        try
        {
            if (definition.State is { } state)
            {
                options = options with { CommitEveryEvents = state.EveryEvents, CommitEveryTime = state.EveryTime };
                _state = StateStore.Open(state.Folder, definition.Engine.Stream, definition.EffectiveJson);
            }
            Engine = new ScoringEngine(definition.Engine, _state?.Archive);
            Resume();
            _loop = new ScoringLoop(Engine, _ends.Source, _ends.Sinks, _state, options, time);
        }
        catch
        {
            Dispose();
            throw;
        }
    }

    /// <summary>The engine. It belongs to the loop while that runs.</summary>
    public ScoringEngine Engine { get; }

    /// <summary>Whether it goes on from an earlier run.</summary>
    public bool IsResumed { get; private set; }

    /// <summary>What became of the settings of the state that this run goes on from, or null where it begins.</summary>
    public BankChange? BankChange { get; private set; }

    /// <summary>Called within each commit of the loop, when all is written and nothing counts yet; tests die here.</summary>
    internal Action? BeforeCommit
    {
        init => _state?.BeforeCommit = value;
    }

    /// <summary>The latest health snapshot. Any thread may ask.</summary>
    public HealthSnapshot Health => _loop.Health;

    /// <summary>The largest coefficients found last, or null before or where none are looked for. Any thread may ask.</summary>
    public LargestCoefficients? Coefficients => _loop.Coefficients;

    /// <summary>Examples of the latest rejects of this run, a few for each reason. Any thread may ask.</summary>
    public ImmutableArray<RejectExample> RejectExamples => _loop.RejectExamples;

    /// <summary>How far this run has come. Any thread may ask.</summary>
    public LoopProgress Progress => _loop.Progress;

    /// <summary>Runs until the source ends or the run is stopped; either way it ends with a commit.</summary>
    /// <exception cref="PipelineException">What surrounds the engine is broken. Nothing after the last commit counts.</exception>
    public Task RunAsync(CancellationToken stop) => _loop.RunAsync(stop);

    /// <inheritdoc/>
    public void Dispose()
    {
        _ends.Dispose();
        _state?.Dispose();
    }

    private void Resume()
    {
        var checkpoint = _state?.Read();
        if (checkpoint is not null)
        {
            // Outputs are cut back last, when nothing else can go wrong any more.
            BankChange = Engine.Load(checkpoint.Blocks);
            _ends.Source.Seek(checkpoint.Position);
            IsResumed = true;
        }
        bool isKnown = true;
        foreach (var sink in _ends.Sinks)
        {
            long mark = 0;
            bool hasMark = checkpoint is not null && checkpoint.Marks.TryGetValue(sink.Name, out mark);
            sink.Start(hasMark ? mark : null);
            isKnown &= hasMark;
        }
        if (_state is null || isKnown && checkpoint is not null) return;

        // What a run writes and dies over before its next commit must be told from a file that was there before.
        var marks = _ends.Sinks.ToImmutableSortedDictionary(sink => sink.Name, sink => sink.Flush(), StringComparer.Ordinal);
        var blocks = new StateBlocks();
        Engine.Save(blocks);
        _state.Commit(new Checkpoint(checkpoint?.Position ?? SourcePosition.Start, marks, blocks));
    }
}

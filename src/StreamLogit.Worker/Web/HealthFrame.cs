using System.Collections.Concurrent;
using StreamLogit.Engine.Definition;
using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Web;

/// <summary>One snapshot, with the views of it that anybody has asked for, each made once.</summary>
/// <param name="number">Its number among the frames of this process.</param>
/// <param name="definition">What the engine computes.</param>
/// <param name="moment">What was known.</param>
internal sealed class HealthFrame(long number, EngineDefinition definition, HealthMoment moment)
{
    // Links can name any combination; what is kept must not grow with them.
    private const int MostViews = 64;

    private readonly ConcurrentDictionary<ViewChoice, Lazy<byte[]>> _json = new();

    public long Number => number;

    public HealthMoment Moment => moment;

    /// <summary>The view that a query chooses.</summary>
    public HealthView View(ViewQuery query) => new(definition, moment, ViewChoice.Of(moment.Health, definition.Health, query));

    /// <summary>The same as JSON.</summary>
    public byte[] Json(ViewQuery query)
    {
        var choice = ViewChoice.Of(moment.Health, definition.Health, query);
        if (_json.Count >= MostViews && !_json.ContainsKey(choice)) return Make(choice);
        return _json.GetOrAdd(choice, static (c, frame) => new Lazy<byte[]>(() => frame.Make(c)), this).Value;
    }

    private byte[] Make(ViewChoice choice) => HealthViewJson.Of(new HealthView(definition, moment, choice), number);
}

using StreamLogit.Pipeline.Definition;
using StreamLogit.Worker.Alarms;
using StreamLogit.Worker.Telemetry;
using StreamLogit.Worker.Web.Access;

namespace StreamLogit.Worker.Hosting;

/// <summary>What a worker tells, and to whom, with the secrets that it takes at hand.</summary>
/// <param name="Definition">The stream.</param>
/// <param name="Page">Where the page is served and who may see it, or null where there is none.</param>
/// <param name="Webhook">Where changes of alarms are sent, or null.</param>
/// <param name="Export">What is exported by OTLP.</param>
internal sealed record WorkerSetup(StreamDefinition Definition, PageAccess? Page, WebhookTarget? Webhook, TelemetryExport Export)
{
    /// <summary>Reads what the definition names.</summary>
    /// <exception cref="WrongInputException">A secret, a certificate or a variable of telemetry cannot be used.</exception>
    public static WorkerSetup Read(StreamDefinition definition) => new(
        definition,
        definition.Listen is { } listen ? PageAccess.Read(listen) : null,
        definition.Webhook is { } webhook ? WebhookTarget.Read(webhook) : null,
        TelemetryExport.Read(Environment.GetEnvironmentVariable));
}

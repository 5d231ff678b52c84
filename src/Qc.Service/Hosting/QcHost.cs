using System.Globalization;
using Microsoft.AspNetCore.Authentication;
using Microsoft.AspNetCore.DataProtection;
using Microsoft.AspNetCore.Http.Features;
using Microsoft.AspNetCore.Identity;
using OpenTelemetry.Metrics;
using Qc.Chemistry;
using Qc.Records;
using Qc.Records.People;
using Qc.Records.PrivateServer;
using Qc.Records.Schema;
using Qc.Service.Demo;
using Qc.Service.Features.Audit;
using Qc.Service.Features.Callbacks;
using Qc.Service.Features.Certificates;
using Qc.Service.Features.Lots;
using Qc.Service.Features.Pages;
using Qc.Service.Features.People;
using Qc.Service.Features.Products;
using Qc.Service.Features.Reviews;
using Qc.Service.Features.Session;
using Qc.Service.Features.References;
using Qc.Service.Features.Specifications;
using Qc.Service.Http;
using Qc.Service.Security;
using Serilog;
using Wolverine;
using Wolverine.EntityFrameworkCore;
using Wolverine.ErrorHandling;
using Wolverine.Postgresql;
using Wolverine.RabbitMQ;

namespace Qc.Service.Hosting;

/// <summary>Puts the service together: database, queue, engine, API and pages.</summary>
public static class QcHost
{
    private const string Scheme = "qc";

    /// <summary>Runs until it is stopped.</summary>
    public static async Task RunAsync(string[] args)
    {
        // A bare switch would take the next argument as its value.
        WebApplicationBuilder builder = WebApplication.CreateBuilder(new WebApplicationOptions
        {
            Args = [.. args.Where(a => a != QcOptions.DemoSwitch)],
            WebRootPath = WebRoot.Find(),
        });
        QcOptions options = QcOptions.From(builder.Configuration, args, builder.Environment.ContentRootPath);
        Directory.CreateDirectory(options.DataFolder);
        AddLogging(builder, options);
        await using PrivatePostgres? server = await StartDatabaseAsync(options);
        string owner = options.OwnerConnection ?? server!.OwnerConnectionString;
        string application = options.ApplicationConnection ?? server!.ApplicationConnectionString;
        await SchemaMigrator.MigrateAsync(owner);
        AddServices(builder, options, application);
        AddQueue(builder, options, application);
        await using WebApplication app = builder.Build();
        Map(app);
        await app.StartAsync();
        await FirstAdministrator.MakeAsync(app.Services, app.Configuration);
        if (options.Demo)
        {
            await DemoLoader.LoadAsync(app, options, app.Lifetime.ApplicationStopping);
        }

        app.Services.GetRequiredService<Readiness>().IsLoaded = true;
        app.Logger.LogInformation("Qc listens on {Urls}", string.Join(", ", app.Urls));
        await app.WaitForShutdownAsync();
    }

    private static void AddLogging(WebApplicationBuilder builder, QcOptions options) =>
        builder.Host.UseSerilog((_, logging) => logging
            .MinimumLevel.Information()
            .MinimumLevel.Override("Microsoft", Serilog.Events.LogEventLevel.Warning)
            .MinimumLevel.Override("Wolverine", Serilog.Events.LogEventLevel.Warning)
            .MinimumLevel.Override("Microsoft.EntityFrameworkCore.Database.Command", Serilog.Events.LogEventLevel.Fatal)
            .Enrich.FromLogContext()
            .WriteTo.Console(formatProvider: CultureInfo.InvariantCulture)
            .WriteTo.File(
                new Serilog.Formatting.Json.JsonFormatter(formatProvider: CultureInfo.InvariantCulture),
                Path.Combine(options.DataFolder, "logs", "qc-.log"),
                rollingInterval: RollingInterval.Day));

    private static async Task<PrivatePostgres?> StartDatabaseAsync(QcOptions options)
    {
        if (options.OwnerConnection is not null && options.ApplicationConnection is not null)
        {
            return null;
        }

        using ILoggerFactory logging = LoggerFactory.Create(l => l.AddConsole());
        return await PrivatePostgres.StartAsync(options.DataFolder, logging.CreateLogger("PrivatePostgres"));
    }

    private static void AddServices(WebApplicationBuilder builder, QcOptions options, string application)
    {
        IServiceCollection services = builder.Services;
        services.AddSingleton(options);
        services.AddSingleton(TimeProvider.System);
        services.AddSingleton<IStructureReader, RdkitStructureReader>();
        services.AddSingleton(_ => SiteKeys.Load(options.DataFolder));
        services.AddSingleton(provider => SiteCertificate.Load(
            options.DataFolder, options.Site, builder.Configuration, provider.GetRequiredService<TimeProvider>().GetUtcNow(),
            provider.GetRequiredService<ILogger<SiteCertificate>>()));
        services.AddSingleton<CallbackSender>().AddSingleton<LotWaiters>().AddSingleton<QcMetrics>().AddSingleton<Readiness>();
        services.AddDbContextWithWolverineIntegration<QcDbContext>(b => QcDbContext.Configure(b, application), "queue");
        services.AddScoped<CreateProduct>().AddScoped<ReadProduct>().AddScoped<DraftSpecification>().AddScoped<ApproveSpecification>().AddScoped<ManageReferences>()
            .AddScoped<SubmitLot>().AddScoped<ReadLots>().AddScoped<LotChecker>().AddScoped<DecideLot>().AddScoped<IssueCertificate>()
            .AddScoped<SignedHeads>().AddScoped<ManagePeople>().AddScoped<SigningDesk>().AddScoped<EndCertificate>().AddScoped<LotArchive>();
        services.AddHostedService<IssueDueCertificates>();
        services.AddSingleton<AccessLog>().AddHttpContextAccessor().AddRateLimiter(RateLimits.Add);
        services.AddIdentity<Person, IdentityRole>(identity =>
            {
                // NIST SP 800-63B: length, no composition rules.
                identity.Password = new PasswordOptions
                {
                    RequiredLength = 12, RequireDigit = false, RequireLowercase = false, RequireUppercase = false, RequireNonAlphanumeric = false, RequiredUniqueChars = 4,
                };
                identity.Lockout.MaxFailedAccessAttempts = 5;
                identity.Lockout.DefaultLockoutTimeSpan = TimeSpan.FromMinutes(15);
            })
            .AddEntityFrameworkStores<QcDbContext>().AddDefaultTokenProviders().AddPasswordValidator<CommonPasswords>();

        // A session that was ended ends with the next request, not at the next half hour.
        services.Configure<SecurityStampValidatorOptions>(stamp => stamp.ValidationInterval = TimeSpan.Zero);
        services.ConfigureApplicationCookie(cookie =>
        {
            cookie.Cookie.Name = "qc-session";
            cookie.Cookie.HttpOnly = true;
            cookie.Cookie.SameSite = SameSiteMode.Lax;
            cookie.ExpireTimeSpan = TimeSpan.FromMinutes(30);
            cookie.SlidingExpiration = true;
            cookie.LoginPath = "/sign-in";
            cookie.AccessDeniedPath = "/sign-in";
            cookie.Events.OnRedirectToLogin = context => AnswerOrRedirect(context, StatusCodes.Status401Unauthorized);
            cookie.Events.OnRedirectToAccessDenied = context =>
            {
                context.HttpContext.Items[Refusals.Mark] = true;
                return AnswerOrRedirect(context, StatusCodes.Status403Forbidden);
            };
        });
        services.AddAuthentication(Scheme)
            .AddPolicyScheme(Scheme, null, scheme => scheme.ForwardDefaultSelector = context =>
                context.Request.Headers.Authorization.Count > 0 ? LimsKeyHandler.SchemeName : IdentityConstants.ApplicationScheme)
            .AddScheme<AuthenticationSchemeOptions, LimsKeyHandler>(LimsKeyHandler.SchemeName, null);
        services.Configure<AuthenticationOptions>(o => (o.DefaultAuthenticateScheme, o.DefaultChallengeScheme, o.DefaultScheme) = (Scheme, Scheme, Scheme));
        services.AddAuthorization(Policies.Add);
        services.AddDataProtection().PersistKeysToFileSystem(new DirectoryInfo(Path.Combine(options.DataFolder, "keys", "sessions"))).SetApplicationName("qc");
        services.ConfigureHttpJsonOptions(json => Json.Configure(json.SerializerOptions));
        services.AddExceptionHandler<UnexpectedErrors>().AddProblemDetails();
        services.AddOpenApi("v1", openApi => openApi.OpenApiVersion = Microsoft.OpenApi.OpenApiSpecVersion.OpenApi3_1);
        builder.AddQcPages();
        services.AddHealthChecks().AddCheck<Readiness>("ready");
        services.AddOpenTelemetry().WithMetrics(metrics => metrics
            .AddMeter(QcMetrics.MeterName).AddAspNetCoreInstrumentation().AddRuntimeInstrumentation().AddPrometheusExporter());
        services.Configure<FormOptions>(form =>
        {
            form.MultipartBodyLengthLimit = options.LargestBodyBytes;
            form.ValueLengthLimit = (int)options.LargestBodyBytes;
        });
        builder.WebHost.ConfigureKestrel(kestrel => kestrel.Limits.MaxRequestBodySize = options.LargestBodyBytes);
    }

    private static void AddQueue(WebApplicationBuilder builder, QcOptions options, string application) =>
        builder.Host.UseWolverine(wolverine =>
        {
            wolverine.PersistMessagesWithPostgresql(application, "queue");
            wolverine.UseEntityFrameworkCoreTransactions();

            // One process takes up at once what it left at a crash; several have to agree on who does.
            wolverine.Durability.Mode = options.RabbitMq is null ? DurabilityMode.Solo : DurabilityMode.Balanced;
            wolverine.Policies.UseDurableLocalQueues();
            wolverine.OnException<Exception>().RetryWithCooldown(TimeSpan.FromSeconds(1), TimeSpan.FromSeconds(5), TimeSpan.FromSeconds(30));
            if (options.RabbitMq is { } address)
            {
                wolverine.UseRabbitMq(new Uri(address)).AutoProvision();
                wolverine.PublishMessage<CheckLot>().ToRabbitQueue("qc-check-lot").UseDurableOutbox();
                wolverine.ListenToRabbitQueue("qc-check-lot").UseDurableInbox();
            }
            else
            {
                wolverine.LocalQueueFor<CheckLot>().MaximumParallelMessages(Math.Max(1, Environment.ProcessorCount)).UseDurableInbox();
            }
        });

    private static void Map(WebApplication app)
    {
        app.UseExceptionHandler();
        app.Use(RequestId);
        app.UseSerilogRequestLogging();
        app.UseStatusCodePages(StatusProblems.WriteAsync);
        app.UseMiddleware<Refusals>();
        app.UseMiddleware<SameOrigin>();
        app.UseStaticFiles();
        app.UseRouting();
        app.UseAuthentication();
        app.UseAuthorization();
        app.UseRateLimiter();
        app.MapHealthChecks("/health/live", new() { Predicate = _ => false });
        app.MapHealthChecks("/health/ready");
        app.MapPrometheusScrapingEndpoint("/metrics");
        app.MapOpenApi("/openapi/{documentName}.json");
        app.UseSwaggerUI(ui =>
        {
            ui.RoutePrefix = "docs";
            ui.SwaggerEndpoint("/openapi/v1.json", "Qc v1");
        });
        RouteGroupBuilder api = app.MapGroup("/api/v1");
        api.MapSession();
        api.MapSecondFactor();
        api.MapProducts();
        api.MapSpecifications();
        api.MapReferences();
        api.MapLots();
        api.MapReviews();
        api.MapCertificates();
        api.MapVerify();
        api.MapAudit();
        api.MapPeople();
        app.MapQcPages();
    }

    private static Task AnswerOrRedirect(RedirectContext<Microsoft.AspNetCore.Authentication.Cookies.CookieAuthenticationOptions> context, int status)
    {
        if (context.Request.Path.StartsWithSegments("/api"))
        {
            context.Response.StatusCode = status;
        }
        else
        {
            context.Response.Redirect(context.RedirectUri);
        }

        return Task.CompletedTask;
    }

    /// <summary>Takes the caller's request id, or gives one, and puts it on answer and log lines.</summary>
    private static async Task RequestId(HttpContext context, RequestDelegate next)
    {
        string? sent = context.Request.Headers["X-Request-Id"];
        string id = sent is { Length: > 0 and <= 100 } && sent.All(c => char.IsAsciiLetterOrDigit(c) || c is '-' or '_' or '.') ? sent : context.TraceIdentifier;
        context.TraceIdentifier = id;
        context.Response.Headers["X-Request-Id"] = id;
        using (Serilog.Context.LogContext.PushProperty("RequestId", id))
        {
            await next(context);
        }
    }
}
